package analysis

import (
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// Point is every number of a design at one exact assignment, each as written in the spec.
type Point struct {
	Circuit plant.Circuit
	Network network.Parts
}

// Axis is one field that has a spread: its dotted spec path ("output-capacitors.0.esr", list items from 0), and its values
// in SI units, as written. Min <= Nominal <= Max.
type Axis struct {
	Path              string
	Min, Nominal, Max float64
}

// Design is a converter with spreads: the nominal point and the axes along which it varies. Whatever is not on an axis keeps
// its nominal value. input-voltage and load.current are the operating axes; all others are tolerances.
type Design struct {
	Nominal Point
	Axes    []Axis
}

// Setting assigns one field, by its dotted path, in SI units.
type Setting struct {
	Path  string
	Value float64
}

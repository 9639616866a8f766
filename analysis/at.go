package analysis

import (
	"fmt"
	"math"

	"halfplane/analysis/plant"
)

var nan = math.NaN()

// noIdeal stands where the closed forms were not asked for.
var noIdeal = plant.Ideal{Duty: nan, ControlGain: nan, LineGain: nan, Resonance: nan, Quality: nan, RHPZero: nan, ESRZero: nan}

// At evaluates exactly one assignment; fields left out are nominal. The corner lists every axis of the design and then whatever
// else was assigned. The output voltage is taken by its magnitude. Errors: a path that is no field of this design, a
// number outside a model's domain.
func At(d *Design, settings []Setting) (Corner, error) {
	w, err := newWorker(d)
	if err != nil {
		return Corner{}, err
	}
	at := make([]Setting, len(d.Axes), len(d.Axes)+len(settings))
	for i, axis := range d.Axes {
		at[i] = Setting{Path: axis.Path, Value: axis.Nominal}
	}
	for i, axis := range d.Axes {
		*w.fields[i] = axis.Nominal
	}
	for _, s := range settings {
		field := Field(&w.point, s.Path)
		if field == nil {
			return Corner{}, fmt.Errorf("assigning a corner: this design has no field %q", s.Path)
		}
		*field = s.Value
		onAxis := false
		for i := range w.fields {
			if w.fields[i] == field {
				at[i].Value, onAxis = s.Value, true
			}
		}
		if !onAxis {
			at = append(at, s)
		}
	}
	w.point.Circuit.OutputVoltage = math.Abs(w.point.Circuit.OutputVoltage)
	w.solve(true, true)
	c, err := w.corner()
	c.At = at
	if err != nil {
		return c, fmt.Errorf("analysing the corner: %w", err)
	}
	w.explain(&c, true)
	return c, nil
}

package lsp

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"sort"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/transfer"
)

// A value "sets" a figure when the figure follows it: moving the value by step moves the figure by at least share of that,
// relatively. A product of parts follows each of them by 1, a square root by one half, a parallel or series pair by the
// part's weight in it; share keeps the parts that matter and drops a winding's resistance from the resonance.
const (
	step  = 0.01
	share = 0.2
)

// sets lists the figures that the value at the pointer sets now, at nominal input, load and parts.
func (p *place) sets(pointer string) []string {
	o, stale := p.figures()
	if o == nil || o.file.Spec == nil {
		return nil
	}
	design := o.file.Spec.Design()
	path := strings.ReplaceAll(strings.TrimPrefix(pointer, "/"), "/", ".")
	out := effects(&design.Nominal, path)
	for i := range out {
		out[i] = "sets " + out[i] + stale
	}
	return out
}

// effects names the figures that follow a field, with their values.
func effects(at *analysis.Point, path string) []string {
	moved := copied(at)
	field := analysis.Field(&moved, path)
	if field == nil || *field == 0 || math.IsNaN(*field) {
		return nil
	}
	*field *= 1 + step
	before, after := named(at), named(&moved)
	var out []string
	for i, b := range before {
		// The same roots exist before and after but where a root appears or goes, which is nothing that a value sets.
		if i >= len(after) || after[i].name != b.name || b.value == 0 {
			break
		}
		if math.Abs(after[i].value/b.value-1) >= share*step {
			out = append(out, fmt.Sprintf("%s %s", b.name, figure(b.value, b.unit)))
		}
	}
	return out
}

// namedFigure is one figure with its name and unit.
type namedFigure struct {
	name  string
	value float64
	unit  string
}

// named gives the figures of a power stage and of its network that parts set, those that exist.
func named(at *analysis.Point) []namedFigure {
	var out []namedFigure
	add := func(name string, value float64, unit string) {
		if !math.IsNaN(value) && !math.IsInf(value, 0) {
			out = append(out, namedFigure{name, value, unit})
		}
	}
	var product transfer.Product
	if network.BuildIdeal(&at.Network, &product) == nil {
		if product.Integrators == 1 {
			add("the network's integrator, gain 1 at", math.Abs(product.Gain)/(2*math.Pi), "Hz")
		}
		addRoots(add, "the network's zero", product.Zeros)
		addRoots(add, "the network's pole", product.Poles)
		add("the output voltage", network.SetPoint(&at.Network), "V")
	}
	var s plant.Solution
	if plant.Solve(&at.Circuit, &s) == nil {
		add("duty", s.Duty, "")
		add("inductor ripple", s.InductorRipple, "A")
		if s.HasModel {
			add("resonance", s.Resonance, "Hz")
			add("the resonance's quality", s.Quality, "")
			add("ESR zero", s.ESRZero, "Hz")
			add("right-half-plane zero", s.RHPZero, "Hz")
			add("modulator gain", s.ModulatorGain, "")
		}
		if s.Current != nil {
			add("quality at half the switching frequency", s.Current.HalfFrequencyQuality, "")
		}
	}
	return out
}

// addRoots adds roots by ascending frequency, one of a conjugate pair.
func addRoots(add func(string, float64, string), name string, roots []complex128) {
	var hertz []float64
	for _, r := range roots {
		if imag(r) >= 0 {
			hertz = append(hertz, cmplx.Abs(r)/(2*math.Pi))
		}
	}
	sort.Float64s(hertz)
	for _, f := range hertz {
		add(name, f, "Hz")
	}
}

// copied is a point whose lists are its own.
func copied(at *analysis.Point) analysis.Point {
	p := *at
	p.Circuit.Banks = slices.Clone(p.Circuit.Banks)
	p.Network.Zeros = slices.Clone(p.Network.Zeros)
	p.Network.Poles = slices.Clone(p.Network.Poles)
	p.Network.Numerator = slices.Clone(p.Network.Numerator)
	p.Network.Denominator = slices.Clone(p.Network.Denominator)
	return p
}

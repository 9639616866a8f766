package rules

import (
	"math"
	"slices"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// slip is one way in which a stated figure can have gone wrong, with what the figure would then be: with losses, without,
// and the lossy figure scaled by the loss-free change. A designer may have computed any of them.
type slip struct {
	rule   string // the rule that names it
	words  string // "the turns ratio left out"
	values []float64
}

// slipFit is how near a stated figure must lie to what a slip would give.
const slipFit = 0.02

// nameSlip finds the slip that explains a stated figure: the only one that fits, where slips that come to the same figure
// count as one. It returns "" twice when none fits or several unlike ones do.
func nameSlip(c *Case, corner *analysis.Corner, figure statedFigure, stated, got float64) (rule, words string) {
	var fitting []slip
	for _, s := range slipsOf(c, corner, figure, got) {
		if figure.agrees(s.values[0], got, c.threshold(statedTolerance)) {
			continue // no slip: it hardly changes the figure
		}
		fits := func(value float64) bool {
			return figure.agrees(stated, value, slipFit) && (inverts(c.circuit(corner.At).Topology) || stated*value >= 0)
		}
		if slices.ContainsFunc(s.values, fits) {
			fitting = append(fitting, s)
		}
	}
	if len(fitting) == 0 {
		return "", ""
	}
	all := make([]string, 0, len(fitting))
	rule = fitting[0].rule
	for _, s := range fitting {
		if !coincide(s, fitting[0]) {
			return "", ""
		}
		if !slices.Contains(all, s.words) {
			all = append(all, s.words)
		}
		if s.rule != rule {
			rule = "turns-ratio"
			if figure.inductive {
				rule = "reflected-inductance"
			}
		}
	}
	return rule, strings.Join(all, ", or ")
}

// inverts says whether a topology turns the voltage over, so that a gain may be written with either sign.
func inverts(t plant.Topology) bool { return t == plant.BuckBoost || t == plant.Cuk }

// coincide says whether two slips come to the same figure: their loss-free or their scaled values are equal.
func coincide(a, b slip) bool {
	for _, x := range a.values {
		for _, y := range b.values {
			if math.Abs(x-y) <= 1e-3*math.Abs(y) {
				return true
			}
		}
	}
	return false
}

// workings recompute one figure with a slip put in.
type workings struct {
	c          *Case
	circuit    *plant.Circuit // at nominal input and full load; not to be changed
	network    *network.Parts // likewise
	figure     statedFigure
	got, ideal float64 // ideal is NaN where there is no closed form
	mode       plant.Mode
	duty       float64
}

// slipsOf lists what can have gone wrong in a figure.
func slipsOf(c *Case, corner *analysis.Corner, figure statedFigure, got float64) []slip {
	circuit := c.circuit(corner.At)
	if circuit.Modulator.Scheme == plant.PeakCurrentMode && strings.HasSuffix(figure.key, "-gain") {
		figure.ideal = nil // the closed forms are per unit duty, the figure is per control volt
	}
	w := workings{c: c, circuit: circuit, network: c.parts(corner.At), figure: figure, got: got, ideal: math.NaN(), mode: corner.Plant.Mode, duty: corner.Plant.Duty}
	if figure.ideal != nil {
		base := plant.IdealOf(circuit)
		w.ideal = figure.ideal(&base)
	}
	n := corner.Plant.TurnsRatio
	var slips []slip
	switch figure.key {
	case "turns-ratio":
		slips = append(slips,
			w.factor("turns-ratio", "the ratio inverted (primary over secondary)", 1/(n*n)),
			w.factor("turns-ratio", "the ratio applied twice", n),
			w.factor("turns-ratio", "the ratio left out", 1/n))
		return append(slips, w.units()...)
	case "effective-inductance":
		return append(w.reflections(n), w.pieces()...)
	case "line-gain", "control-gain":
		slips = w.gainFactors(n)
	}
	slips = append(slips, w.ratioEverywhere(n)...)
	if figure.inductive {
		slips = append(slips, w.reflections(n)...)
	}
	slips = append(slips, w.units()...)
	slips = append(slips, w.duties()...)
	slips = append(slips, w.pieces()...)
	return append(slips, w.conditions()...)
}

// factor is a slip that multiplies the figure.
func (w workings) factor(rule, words string, by float64) slip {
	s := slip{rule: rule, words: words, values: []float64{w.got * by}}
	if !math.IsNaN(w.ideal) {
		s.values = append(s.values, w.ideal*by)
	}
	return s
}

// changed is a slip that recomputes the figure from a changed power stage; none where nothing can be computed from it.
func (w workings) changed(rule, words string, change func(*plant.Circuit)) []slip {
	circuit := *w.circuit
	circuit.Banks = slices.Clone(circuit.Banks)
	change(&circuit)
	// Whoever made the slip went on computing in the mode that the figure is stated for.
	circuit.Synchronous = circuit.Synchronous || w.mode == plant.Continuous
	s := slip{rule: rule, words: words}
	if w.figure.ideal != nil {
		ideal := plant.IdealOf(&circuit)
		if v := w.figure.ideal(&ideal); !math.IsNaN(v) && ideal.Duty > 0 && ideal.Duty < 1 {
			s.values = append(s.values, v*w.got/w.ideal, v)
		}
	}
	if v := w.recomputed(&circuit); !math.IsNaN(v) {
		s.values = append(s.values, v)
	}
	if len(s.values) == 0 || math.IsNaN(s.values[0]) {
		return nil
	}
	return []slip{s}
}

// recomputed is the figure of a changed power stage, NaN where it has none.
func (w workings) recomputed(circuit *plant.Circuit) float64 {
	var corner analysis.Corner
	if w.figure.reads == Figures {
		var err error
		corner, err = analysis.At(&analysis.Design{Nominal: analysis.Point{Circuit: *circuit, Network: *w.network}}, nil)
		if err != nil {
			return math.NaN()
		}
	} else if plant.Solve(circuit, &corner.Plant) == nil {
		corner.Reached = true
	}
	if !w.figure.reads.knows(&corner) {
		return math.NaN()
	}
	return w.figure.of(&corner, circuit)
}

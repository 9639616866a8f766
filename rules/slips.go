package rules

import (
	"math"
	"slices"
	"strings"

	"halfplane/analysis"
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
		if agrees(s.values[0], got, c.threshold(statedTolerance)) {
			continue // no slip: it hardly changes the figure
		}
		for _, value := range s.values {
			if agrees(stated, value, slipFit) {
				fitting = append(fitting, s)
				break
			}
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

// slipsOf lists what can have gone wrong in a figure.
func slipsOf(c *Case, corner *analysis.Corner, figure statedFigure, got float64) []slip {
	n := corner.Plant.TurnsRatio
	circuit := c.circuit(corner.At)
	if circuit.Modulator.Scheme == plant.PeakCurrentMode && strings.HasSuffix(figure.key, "-gain") {
		figure.ideal = nil // the closed forms are per unit duty, the figure is per control volt
	}
	w := workings{circuit: circuit, figure: figure, got: got, ideal: math.NaN(), mode: corner.Plant.Mode}
	if figure.ideal != nil {
		base := plant.IdealOf(circuit)
		w.ideal = figure.ideal(&base)
	}
	switch figure.key {
	case "turns-ratio":
		return []slip{
			w.factor("turns-ratio", "the ratio inverted (primary over secondary)", 1/(n*n)),
			w.factor("turns-ratio", "the ratio applied twice", n),
			w.factor("turns-ratio", "the ratio left out", 1/n),
		}
	case "effective-inductance":
		return w.reflections(n)
	}
	var slips []slip
	if figure.key == "line-gain" || figure.key == "control-gain" {
		slips = append(slips, w.gainFactors(n)...)
	}
	slips = append(slips, w.ratioEverywhere(n)...)
	if figure.inductive {
		slips = append(slips, w.reflections(n)...)
	}
	return append(slips, w.others(c)...)
}

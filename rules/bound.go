package rules

import (
	"math"

	"halfplane/analysis"
)

// Bound is a worst figure of the loop with what is asked of it.
type Bound struct {
	Figure      string // its key in the JSON of figures
	Unit        string // "" for a ratio
	Value       float64
	Limit       float64 // NaN: nothing is asked
	AtMost      bool    // the limit is an upper one
	Corner      []analysis.Setting
	CornerWords string
}

// Met says whether the figure is as it is asked to be. A margin that does not exist is, as at any stable corner.
func (b Bound) Met() bool {
	switch {
	case math.IsNaN(b.Limit) || math.IsNaN(b.Value):
		return true
	case b.AtMost:
		return b.Value <= b.Limit
	}
	return b.Value >= b.Limit
}

// LoopFigures are the worst figures that a change of a design is judged by, in the order in which they are told.
func LoopFigures() []string {
	var keys []string
	for _, f := range judgedFigures {
		keys = append(keys, f.key)
	}
	return keys
}

type judgedFigure struct {
	key, unit string
	rule      *Rule // nil: nothing is asked
	atMost    bool
	worst     func(*analysis.Worsts) analysis.Worst
	limit     func(*Case) float64
}

var judgedFigures = []judgedFigure{
	{"phase-margin", "deg", &phaseMargin, false, func(w *analysis.Worsts) analysis.Worst { return w.PhaseMargin },
		func(c *Case) float64 { return c.atLeast(phaseMarginLimit, "/targets/phase-margin") }},
	{"gain-margin", "dB", &gainMargin, false, func(w *analysis.Worsts) analysis.Worst { return w.GainMargin },
		func(c *Case) float64 { return c.atLeast(gainMarginLimit, "/targets/gain-margin") }},
	{"gain-reduction-margin", "dB", &conditionalStability, false, func(w *analysis.Worsts) analysis.Worst { return w.GainReductionMargin },
		func(c *Case) float64 { return c.threshold(reductionMargin) }},
	{"modulus-margin", "", &modulusMargin, false, func(w *analysis.Worsts) analysis.Worst { return w.ModulusMargin },
		func(c *Case) float64 { return c.atLeast(modulusMarginLimit, "/targets/modulus-margin") }},
	{"crossover-over-rhp-zero", "", &rhpZeroCrossover, true, func(w *analysis.Worsts) analysis.Worst { return w.CrossoverOverRHPZero },
		func(c *Case) float64 { return c.threshold(rhpZeroFraction) }},
	{"crossover", "Hz", nil, true, func(w *analysis.Worsts) analysis.Worst { return w.Crossover }, nil},
	{"crossover-low", "Hz", nil, false, func(w *analysis.Worsts) analysis.Worst { return w.CrossoverLow }, nil},
}

// FigureOf is one of LoopFigures at its worst, NaN where it does not exist.
func FigureOf(key string, w *analysis.Worsts) float64 {
	for _, f := range judgedFigures {
		if f.key == key {
			return f.worst(w).Value
		}
	}
	return math.NaN()
}

// Bounds are the worst figures of a case with the limits in force. A rule that a policy switches off asks nothing.
func (c *Case) Bounds() []Bound {
	bounds := make([]Bound, 0, len(judgedFigures))
	for _, f := range judgedFigures {
		worst := f.worst(&c.Result.Worst)
		b := Bound{Figure: f.key, Unit: f.unit, Value: worst.Value, Limit: math.NaN(), AtMost: f.atMost}
		if f.rule != nil && c.Settings.Severities[f.rule.Name] != None {
			b.Limit = f.limit(c)
		}
		if worst.Corner >= 0 && worst.Corner < len(c.Result.Corners) {
			b.Corner = c.Result.Corners[worst.Corner].At
			b.CornerWords = c.cornerWords(b.Corner)
		}
		bounds = append(bounds, b)
	}
	return bounds
}

// Stable says whether the closed loop is stable at every corner that was analysed.
func (c *Case) Stable() bool { return c.unstable() == nil }

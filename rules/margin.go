package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

// margin is a figure of the loop that should be large, as the three margin rules see it.
type margin struct {
	name   string // in words
	unit   string
	target string // JSON pointer
	limit  Threshold
	of     func(*analysis.Corner) float64 // NaN: the loop has none
	sum    func(*analysis.Corner) string  // the figure redone with the corner's numbers
}

// decide judges a margin at its worst corner. At an unstable corner closed-loop-stability is the finding and the margin
// its consequence, told for the same corner; at a stable corner a margin that does not exist holds.
func (m margin) decide(c *Case) []Finding {
	limit := c.atLeast(m.limit, m.target)
	corner, negative := c.unstable(), 0.0
	if corner == nil {
		corner, negative = c.worst(func(k *analysis.Corner) float64 { return -m.of(k) })
		if corner == nil || -negative >= limit {
			return nil
		}
	}
	value := m.of(corner)
	f := c.atCorner(targetOrGainPart(m.target)(c), corner)
	switch {
	case corner.Loop.Stable:
		f.Message = fmt.Sprintf("%s %s is below %s", m.name, number(value, m.unit), number(limit, m.unit))
	case math.IsNaN(value):
		f.Message = fmt.Sprintf("no %s of %s: the closed loop is unstable", m.name, number(limit, m.unit))
	default:
		f.Message = fmt.Sprintf("%s %s counts for nothing against %s: the closed loop is unstable", m.name, number(value, m.unit), number(limit, m.unit))
		if value < 0 {
			f.Message = fmt.Sprintf("%s %s is below %s: the closed loop is unstable", m.name, number(value, m.unit), number(limit, m.unit))
		}
	}
	if !math.IsNaN(value) {
		f.Formula = m.sum(corner)
	}
	f.Measured, f.Limit, f.Nominal = asNumber(value, m.unit), asNumber(limit, m.unit), asNumber(m.of(c.nominal()), m.unit)
	c.relate(&f, "sets the gain at crossover", gainPart(c))
	c.relate(&f, "is what the margin was found at", "/input-voltage", "/load/current", "/inductor/inductance",
		"/output-capacitor/capacitance", "/output-capacitor/esr", "/output-capacitors")
	return []Finding{f}
}

// unstable is the corner with an unstable closed loop whose phase margin is lowest, nil when every modelled corner is stable.
func (c *Case) unstable() *analysis.Corner {
	corner, _ := c.worst(func(k *analysis.Corner) float64 {
		if !k.Reached || k.Loop == nil || k.Loop.Stable {
			return math.NaN()
		}
		return unstableScore(k.Loop.PhaseMargin)
	})
	return corner
}

// loopFigure reads one figure of a corner's loop, NaN without a model.
func loopFigure(k *analysis.Corner, read func(*analysis.Corner) float64) float64 {
	if !k.Reached || k.Loop == nil {
		return math.NaN()
	}
	return read(k)
}

// unstableScore ranks unstable loops: the lowest phase margin first, those that never cross one last.
func unstableScore(phaseMargin float64) float64 {
	if math.IsNaN(phaseMargin) {
		return -360
	}
	return -phaseMargin
}

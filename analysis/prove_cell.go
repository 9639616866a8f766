package analysis

import (
	"math"
	"slices"

	"halfplane/analysis/interval"
)

// segment is a stretch of ln ω, or one of the two ends beyond which only −1 itself is kept away from.
type segment struct {
	part      stretch
	low, high float64
}

type stretch int

const (
	inRange  stretch = iota + 1 // the margin's own set is avoided
	outRange                    // beyond the range in which margins count: T is not −1
	fromZero                    // ω from 0 to e^high: |T| > 1
	toEnd                       // ω from e^low on: |T| < 1
)

// task is a cell with the stretches of frequency that are not settled there yet.
type task struct {
	cell
	open []segment
}

// volume is the share of the whole box that a cell is.
func (b *boxProof) volume(c *cell) float64 {
	v := 1.0
	for i := range c.low {
		v *= (c.high[i] - c.low[i]) / (b.whole.high[i] - b.whole.low[i])
	}
	return v
}

// outcome is what became of a task: settled (no children, no counterexample), split, or refuted.
type outcome struct {
	children []task
	stuck    *task     // too small to split
	counter  []float64 // an assignment at which the margin falls short
	value    float64   // the margin there
	outside  string    // the middle of the cell is outside what the proof covers, and why
	looked   int       // how many boxes (cell × stretch) were looked at
}

// settle works on one task: what can be proved of it is dropped, the rest is tried at points and halved.
func (b *boxProof) settle(w *worker, t *task) (o outcome) {
	var scores [interval.Symbols]float64
	var adverse [interval.Symbols]float64
	loop, why := b.loopOver(&t.cell)
	o.looked = 1
	left := t.open
	if why == "" {
		left = nil
		for _, s := range t.open {
			left = b.stretch(&loop, s, left, &scores, &adverse, &o.looked)
		}
		if len(left) == 0 {
			return o
		}
	}
	for _, way := range [2]float64{0, 1} {
		if o.counter, o.value, o.outside = b.try(w, &t.cell, &adverse, way); o.counter != nil || o.outside != "" {
			return o
		}
	}
	rest := task{cell: t.cell, open: left}
	axis := b.widest(&t.cell, &scores, why != "")
	if axis < 0 {
		o.stuck = &rest
		return o
	}
	middle := t.low[axis] + (t.high[axis]-t.low[axis])/2
	for side := range 2 {
		child := task{cell: cell{slices.Clone(t.low), slices.Clone(t.high)}, open: slices.Clone(left)}
		if side == 0 {
			child.high[axis] = middle
		} else {
			child.low[axis] = middle
		}
		o.children = append(o.children, child)
	}
	return o
}

// bendWeight weighs how much an axis bends the loop gain against how far it moves it; chosen by trial on the golden designs: 0 leaves
// wide axes unsplit whose first order cancels, 1 takes up to seven times as many boxes.
const bendWeight = 0.03

// stretch tries to settle one stretch of frequency and appends to left what it cannot, halved as long as halving frequency is the
// remedy. What each symbol moves there goes into scores, the direction that makes it worse into adverse.
func (b *boxProof) stretch(l *loopForms, s segment, left []segment, scores, adverse *[interval.Symbols]float64, looked *int) []segment {
	const narrow = 1e-3
	*looked++
	switch s.part {
	case fromZero:
		if b.largeBelow(l, s.high) {
			return left
		}
		return append(left, s)
	case toEnd:
		if b.smallAbove(l, s.low) {
			return left
		}
		return append(left, s)
	}
	set := b.set
	if s.part == outRange {
		set = phaseSet{0}
	}
	var t gainForms
	known := b.between(l, s.low, s.high, &t)
	if known {
		if set.beyond(b.size(&t)) || t.whole && set.avoids(b.space, &t.g, &t.theta) {
			return left
		}
		known = t.whole
	}
	halves := s.high-s.low > 0.1
	if known {
		moved := 0.0
		for i := range b.frequency {
			moved += math.Abs(t.g.Coef[i]) + math.Abs(t.theta.Coef[i])
		}
		own := math.Abs(t.g.Coef[b.frequency]) + math.Abs(t.theta.Coef[b.frequency])
		halves = s.high-s.low > narrow && own > moved/2
	}
	if halves {
		middle := s.low + (s.high-s.low)/2
		left = b.stretch(l, segment{s.part, s.low, middle}, left, scores, adverse, looked)
		return b.stretch(l, segment{s.part, middle, s.high}, left, scores, adverse, looked)
	}
	if known {
		worse := set.worsens(b.space, &t.g, &t.theta, b.frequency)
		for i := range b.frequency {
			spread := math.Abs(t.g.Coef[i]) + math.Abs(t.theta.Coef[i])
			scores[i] += math.Abs(worse[i]) + spread + bendWeight*l.bend[i]
			adverse[i] += worse[i]
		}
	}
	return append(left, s)
}

// widest picks the axis to halve: the one that moves the loop most where it was not settled, or, where that is not known, the widest by
// ratio, input and load first; −1: none is wide enough.
func (b *boxProof) widest(c *cell, scores *[interval.Symbols]float64, unknown bool) int {
	best, most := -1, 0.0
	known := false
	for i := range c.low {
		known = known || scores[i] > 0
	}
	for i := range c.low {
		width := c.high[i] - c.low[i]
		ratio := width / (math.Abs(c.low[i]) + math.Abs(c.high[i]))
		if !(ratio > 1e-7) {
			continue
		}
		score := scores[i]
		if unknown || !known {
			score = ratio
			if path := b.plan.design.Axes[b.axes[i]].Path; path == "input-voltage" || path == "load.current" {
				score *= 3
			}
		}
		if score > most || best < 0 {
			best, most = i, score
		}
	}
	return best
}

// try evaluates one point of a cell, its middle or the corner in the adverse direction, by the ordinary analysis.
func (b *boxProof) try(w *worker, c *cell, adverse *[interval.Symbols]float64, way float64) (counter []float64, value float64, outside string) {
	x := slices.Clone(b.nominal)
	for i, axis := range b.axes {
		x[axis] = c.low[i] + (c.high[i]-c.low[i])/2
		switch {
		case way*adverse[i] > 0:
			x[axis] = c.high[i]
		case way*adverse[i] < 0:
			x[axis] = c.low[i]
		}
	}
	return b.judge(w, x)
}

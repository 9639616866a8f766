package report

import (
	"math"

	"halfplane/analysis"
)

// selection is the corners to write and, for an index into the result, the index among them.
type selection struct {
	corners []*analysis.Corner
	index   map[int]int
}

// choose takes nominal first, the operating corners, then every corner that a worst figure refers to.
func choose(r *analysis.Result, o FigureOptions) selection {
	s := selection{index: map[int]int{}}
	if o.At != nil {
		s.corners = []*analysis.Corner{o.At}
		return s
	}
	take := func(i int) {
		if _, have := s.index[i]; !have && i >= 0 && i < len(r.Corners) {
			s.index[i] = len(s.corners)
			s.corners = append(s.corners, &r.Corners[i])
		}
	}
	last := r.Operating // nominal, then so many operating corners
	if o.AllCorners {
		last = len(r.Corners) - 1
	}
	for i := 0; i <= last; i++ {
		take(i)
	}
	for _, e := range worstEntries(&r.Worst) {
		take(e.worst.Corner)
	}
	return s
}

type worstEntry struct {
	key   string
	worst analysis.Worst
}

// worstEntries lists the worst figures that have a corner, in the order of the output.
func worstEntries(w *analysis.Worsts) []worstEntry {
	return []worstEntry{
		{"phase-margin", w.PhaseMargin},
		{"gain-margin", w.GainMargin},
		{"gain-reduction-margin", w.GainReductionMargin},
		{"modulus-margin", w.ModulusMargin},
		{"rhp-zero", w.RHPZero},
		{"crossover", w.Crossover},
		{"crossover-low", w.CrossoverLow},
		{"crossover-over-rhp-zero", w.CrossoverOverRHPZero},
	}
}

func worstOf(r *analysis.Result, index map[int]int) object {
	var out object
	for _, e := range worstEntries(&r.Worst) {
		if e.worst.Corner < 0 || math.IsNaN(e.worst.Value) {
			if e.key != "gain-reduction-margin" { // only a conditionally stable loop has one
				out = append(out, member{e.key, nil})
			}
			continue
		}
		out = append(out, member{e.key, object{{"value", figure(e.worst.Value)}, {"corner", index[e.worst.Corner]}}})
	}
	var spread any
	if ratio := r.Worst.HighestCrossoverOverLowestRHPZero; !math.IsNaN(ratio) {
		spread = object{{"value", figure(ratio)}}
	}
	return append(out, member{"highest-crossover-over-lowest-rhp-zero", spread})
}

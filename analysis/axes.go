package analysis

import (
	"math"
	"slices"
	"strings"
)

// mostStore bounds the axes whose combinations quick depth visits all, 2^8 at each operating corner; beyond it those with the least
// spread go by sensitivity, as resistors do.
const mostStore = 8

// storesEnergy says whether an axis is an inductance, a capacitance or an ESR of the power stage. Margins are not monotone in
// these, and resonances move with their combinations, so all vertices are visited (theory sheet section 10, corners).
func storesEnergy(path string) bool {
	if strings.HasPrefix(path, "compensator.") || strings.HasPrefix(path, "input-filter.") || path == "magnetizing-inductance" {
		return false
	}
	return strings.HasSuffix(path, ".inductance") || strings.HasSuffix(path, ".capacitance") || strings.HasSuffix(path, ".esr")
}

// limitStore moves the axes with the least relative spread from store to other until at most n remain.
func (p *plan) limitStore(n int) {
	for len(p.store) > n {
		least := 0
		for i := range p.store {
			if p.relativeSpread(p.store[i]) < p.relativeSpread(p.store[least]) {
				least = i
			}
		}
		p.other = append(p.other, p.store[least])
		p.store = slices.Delete(p.store, least, least+1)
	}
	slices.Sort(p.other)
}

func (p *plan) relativeSpread(axis int) float64 {
	return (p.box.Max[axis] - p.box.Min[axis]) / p.box.Max[axis]
}

// moving lists the tolerances that change the loop gain or the operating point at any operating corner, those of the power stage
// first. The others (a divider's lower resistor at an ideal amplifier) stay nominal: every one of their extremes is the same.
func (h *hunt) moving() ([]int, error) {
	p := h.plan
	moves := make([][]bool, len(p.points))
	_, err := h.run(len(p.points), func(s *search, unit int) error {
		moves[unit] = s.movingAt(p.points[unit])
		return s.ctx.Err()
	})
	if err != nil {
		return nil, err
	}
	var list []int
	for _, stage := range []bool{true, false} {
		for i, axis := range p.tolerant {
			if h.team.workers[0].circuit[axis] == stage && slices.ContainsFunc(moves, func(at []bool) bool { return at[i] }) {
				list = append(list, axis)
			}
		}
	}
	return list, nil
}

// movingAt says for each tolerance whether it changes anything at one operating corner.
func (s *search) movingAt(o operatingPoint) []bool {
	p, x := s.plan, s.plan.at(o)
	list := make([]bool, len(p.tolerant))
	for i, axis := range p.tolerant {
		x[axis] = p.box.Min[axis]
		low := s.trace(x)
		x[axis] = p.box.Max[axis]
		high := s.trace(x)
		x[axis] = p.nominal[axis]
		list[i] = low != high
	}
	return list
}

// traced is what tells two points apart: operating point and loop gain at some frequencies, bit for bit.
type traced [10]uint64

func (s *search) trace(x []float64) (t traced) {
	w := s.worker
	w.set(x)
	v := [len(t)]float64{0: w.solution.Duty, 1: float64(w.solution.Mode), 2: w.solution.InductorCurrent, 3: w.solution.RHPZero}
	if w.hasLoop() {
		for i, part := range [3]float64{1e-3, 0.05, 0.4} {
			g := w.gain.At(2 * math.Pi * part * w.solution.FilterFrequency)
			v[4+2*i], v[5+2*i] = real(g), imag(g)
		}
	}
	for i := range t {
		t[i] = math.Float64bits(v[i])
	}
	return t
}

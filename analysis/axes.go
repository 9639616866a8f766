package analysis

import (
	"slices"
	"strings"
)

// mostVertices bounds the axes whose combinations are all visited, 2^8 at each operating corner; beyond it those with the least
// spread go by sensitivity, as resistors do.
const mostVertices = 8

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

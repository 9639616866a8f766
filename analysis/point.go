package analysis

import (
	"fmt"
	"slices"

	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/transfer"
)

// clone copies p with its lists, so that setting fields of the copy leaves p alone.
func (p *Point) clone() Point {
	out := *p
	out.Circuit.Banks = slices.Clone(p.Circuit.Banks)
	for i := range out.Circuit.Banks {
		out.Circuit.Banks[i].Derating = slices.Clone(out.Circuit.Banks[i].Derating)
	}
	out.Circuit.Coupling.Derating = slices.Clone(p.Circuit.Coupling.Derating)
	out.Network.Zeros, out.Network.Poles = slices.Clone(p.Network.Zeros), slices.Clone(p.Network.Poles)
	out.Network.Numerator, out.Network.Denominator = slices.Clone(p.Network.Numerator), slices.Clone(p.Network.Denominator)
	return out
}

// LoopGain is T(s) at one point, in the magnitude convention (theory sheet section 7):
//
//	T(s) = C(s) · ModulatorGain · Control(s) · e^(−s·delay of the modulator)
//
// Errors: plant.ErrUnreachable, a number outside the models' domain, and a topology and conduction mode without a model.
func LoopGain(p *Point) (transfer.Product, error) {
	var s plant.Solution
	if err := plant.Solve(&p.Circuit, &s); err != nil {
		return transfer.Product{}, err
	}
	if !s.HasModel {
		return transfer.Product{}, fmt.Errorf("forming the loop gain: no model of a %v in %v", p.Circuit.Topology, s.Mode)
	}
	var c, t transfer.Product
	if err := network.Build(&p.Network, &c); err != nil {
		return transfer.Product{}, err
	}
	assemble(&t, &c, &s, p.Circuit.Modulator.Delay)
	return t, nil
}

// assemble forms the loop gain in t's own storage; the sampled factor is c's.
func assemble(t, c *transfer.Product, s *plant.Solution, delay float64) {
	t.Set(&c.Function)
	t.Times(&s.Control)
	t.Gain *= s.ModulatorGain
	t.Delay += delay
	t.Sampled = c.Sampled
}

package synthesis

import (
	"context"
	"math"
	"math/cmplx"
	"sort"

	"halfplane/analysis"
	"halfplane/analysis/network"
)

// starts is how many crossovers a whole network is begun at.
const starts = 14

// All looks for a whole network: begun by the K factor at crossovers over the whole range, and as it is, the best beginnings followed by the simplex search.
// With ok false the answer is the best that was found, and what it violates.
func (p *Problem) All(ctx context.Context) (best Answer, ok bool) {
	if p.whole == nil {
		best, ok = p.all(ctx)
		p.whole = &whole{best, ok}
	}
	return p.whole.answer, p.whole.ok
}

func (p *Problem) all(ctx context.Context) (best Answer, ok bool) {
	parts := p.present()
	if len(parts) == 0 {
		return best, false
	}
	type beginning struct {
		values []float64
		out    Outcome
	}
	var all []beginning
	add := func(values []float64) {
		changes := make([]analysis.Setting, len(parts))
		for i, part := range parts {
			if !(values[i] > 0) || math.IsInf(values[i], 0) {
				return
			}
			values[i] = math.Min(math.Max(values[i], part.Low), part.High)
			changes[i] = analysis.Setting{Path: part.Path, Value: values[i]}
		}
		all = append(all, beginning{values, p.try(ctx, changes)})
	}
	now := make([]float64, len(parts))
	for i, part := range parts {
		now[i] = p.valueOf(part)
	}
	add(now)
	for _, boost := range [...]float64{20, 0, 35} {
		for i := range starts {
			if values := p.kFactor(parts, p.fastest()*math.Pow(10, -2.5*float64(i)/starts), boost); values != nil {
				add(values)
			}
		}
	}
	sort.SliceStable(all, func(i, j int) bool {
		if all[i].out.Violation != all[j].out.Violation {
			return all[i].out.Violation < all[j].out.Violation
		}
		return all[i].out.Crossover > all[j].out.Crossover
	})
	best.Violation = math.Inf(1)
	for i, b := range all[:min(4, len(all))] {
		if ok && i > 1 {
			break // two good ends are enough to choose from
		}
		a, found := p.Some(ctx, parts, b.values, 60+40*len(parts), false)
		if found && (!ok || a.Crossover > best.Crossover) || !ok && a.Violation < best.Violation {
			best, ok = a, ok || found
		}
	}
	return best, ok
}

// present is the parts that the network has; what is left out stays out.
func (p *Problem) present() []Part {
	var parts []Part
	for _, part := range p.Parts {
		if p.valueOf(part) > 0 {
			parts = append(parts, part)
		}
	}
	return parts
}

// fastest is a crossover (Hz) that no loop here reaches: a third of the filter's frequency, or half of the lowest right-half-plane zero.
func (p *Problem) fastest() float64 {
	corner, err := analysis.At(p.Design, nil)
	if err != nil || !corner.Reached {
		return p.Design.Nominal.Circuit.SwitchingFrequency / 3
	}
	limit := corner.Plant.FilterFrequency / 3
	if zero := corner.Plant.RHPZero; !math.IsNaN(zero) {
		limit = math.Min(limit, zero/2)
	}
	return limit
}

// kFactor gives values of the parts for a crossover (Hz) at nominal, with so many degrees of phase margin above 45°, by Dean Venable, The K
// Factor: a new mathematical tool for stability analysis and synthesis, Proceedings of Powercon 10, 1983: zeros at the crossover over K (type 3: √K), poles at
// the crossover times that, the gain one at the crossover. nil where the network has no such form.
func (p *Problem) kFactor(parts []Part, crossover, more float64) []float64 {
	corner, err := analysis.At(p.Design, nil)
	if err != nil || !corner.Reached || !corner.Plant.HasModel {
		return nil
	}
	w := 2 * math.Pi * crossover
	rest := corner.Plant.Control.At(w) * complex(corner.Plant.ModulatorGain, 0) * cmplx.Exp(complex(0, -w*p.Design.Nominal.Circuit.Modulator.Delay))
	gain := 1 / cmplx.Abs(rest) // of the network, at the crossover
	phase := cmplx.Phase(rest) * 180 / math.Pi
	for phase > 0 {
		phase -= 360
	}
	boost := 45 + more - phase - 90
	n := &p.Design.Nominal.Network
	set := map[string]float64{}
	switch n.Kind {
	case network.Type1:
		set["integrator-capacitor"] = 1 / (w * gain * n.UpperResistor)
	case network.Type2, network.Transconductance:
		r1 := n.UpperResistor
		if n.Kind == network.Transconductance { // the same impedance driven by gm·RL/(R1 + RL)
			r1 = (n.UpperResistor + n.LowerResistor) / (n.LowerResistor * n.Transconductance)
		}
		k := math.Tan((within(boost, 5, 85)/2 + 45) * math.Pi / 180)
		c2 := 1 / (w * gain * k * r1)
		c1 := c2 * (k*k - 1)
		set["rolloff-capacitor"], set["integrator-capacitor"], set["feedback-resistor"] = c2, c1, k/(w*c1)
	case network.Type3:
		tan := math.Tan((within(boost, 10, 170)/4 + 45) * math.Pi / 180)
		k := tan * tan
		c2 := 1 / (w * gain * n.UpperResistor)
		c1 := c2 * (k - 1)
		set["rolloff-capacitor"], set["integrator-capacitor"], set["feedback-resistor"] = c2, c1, math.Sqrt(k)/(w*c1)
		set["lead-resistor"] = n.UpperResistor / (k - 1)
		set["lead-capacitor"] = 1 / (w * math.Sqrt(k) * set["lead-resistor"])
	case network.Optocoupler:
		k := math.Tan((within(boost, 5, 85)/2 + 45) * math.Pi / 180)
		set["integrator-capacitor"] = k / (w * n.UpperResistor)
		set["rolloff-capacitor"] = 1 / (w * k * n.PullUpResistor)
		set["led-resistor"] = n.CurrentTransferRatio * n.PullUpResistor / gain
	case network.TransferFunction, network.Digital:
		out, err := analysis.At(p.Design, nil)
		if err != nil || out.Loop == nil || !(out.Loop.Crossover > 0) {
			return nil
		}
		by := crossover / out.Loop.Crossover
		for _, part := range parts {
			if part.Path == "compensator.integrator" || part.Path == "compensator.gain" || part.Path == Numerator {
				set[part.Path[len("compensator."):]] = p.valueOf(part) * by
				break
			}
		}
	}
	values := make([]float64, len(parts))
	for i, part := range parts {
		v, known := set[part.Path[len("compensator."):]]
		if !known {
			v = p.valueOf(part)
		}
		values[i] = v
	}
	return values
}

func within(v, low, high float64) float64 { return math.Min(math.Max(v, low), high) }

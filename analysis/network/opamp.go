package network

import (
	"math"

	"halfplane/analysis/transfer"
)

// idealAmplifier gives type-1, type-2 and type-3 around an amplifier without limits: H = Zf/Zi (theory sheet section 7) with
//
//	Zf   = (1 + s·R2·C1) / (s·(C1 + C2 + s·R2·C1·C2))     1/(s·C1) for type-1
//	1/Zi = (1 + s·(R1+R3)·C3) / (R1·(1 + s·R3·C3))         1/R1 without the lead branch
//
// Everything is linear in s, so zeros and poles are closed forms. The lower resistor hangs on a virtual ground: no effect.
func idealAmplifier(p *Parts, f *transfer.Function) {
	c2, r2 := p.feedback()
	f.Gain = 1 / (p.UpperResistor * (p.IntegratorCapacitor + c2))
	f.Integrators = 1
	if r2 > 0 {
		f.Zeros = append(f.Zeros, realRoot(r2*p.IntegratorCapacitor))
		if c2 > 0 {
			f.Poles = append(f.Poles, realRoot(r2*series(p.IntegratorCapacitor, c2)))
		}
	}
	if c3, r3 := p.lead(); c3 > 0 {
		f.Zeros = append(f.Zeros, realRoot((p.UpperResistor+r3)*c3))
		if r3 > 0 {
			f.Poles = append(f.Poles, realRoot(r3*c3))
		}
	}
}

// finiteAmplifier gives the same networks around an amplifier A(s) = A0/(1 + s·A0/ωgb), with Na = 1/A(s) = 1/A0 + s/ωgb:
//
//	H = Nf·Ny / (Df·Dy + Na·(Df·Dy + Nf·Ny + Nf·Dy/RL))
//
// The denominator, quartic at most, is formed once in s/scale; all its coefficients are sums of positive terms, so none cancels.
// The zeros stay those of the ideal network.
func finiteAmplifier(p *Parts, f *transfer.Function) error {
	c2, r2 := p.feedback()
	c3, r3 := p.lead()
	scale := 1 / (math.Max(r2, p.UpperResistor) * p.IntegratorCapacitor)
	gain, slope := p.amplifier()

	nf := poly{1, r2 * p.IntegratorCapacitor * scale}
	df := poly{0, (p.IntegratorCapacitor + c2) * scale, r2 * p.IntegratorCapacitor * c2 * scale * scale}
	ny := poly{1, (p.UpperResistor + r3) * c3 * scale}
	dy := poly{p.UpperResistor, p.UpperResistor * r3 * c3 * scale}
	na := poly{1 / gain, slope * scale}

	forward := df.times(dy)
	noise := forward.plus(nf.times(ny))
	if p.LowerResistor > 0 {
		noise = noise.plus(nf.times(dy).scaled(1 / p.LowerResistor))
	}
	den := forward.plus(na.times(noise))

	idealAmplifier(p, f)
	f.Poles, f.Integrators = f.Poles[:0], 0
	f.Gain = 1 / den[0]
	var err error
	f.Poles, err = den.appendRoots(f.Poles, scale)
	return err
}

// hasAmplifier says whether the amplifier's data make it finite.
func (p *Parts) hasAmplifier() bool { return p.GainBandwidth > 0 || p.OpenLoopGain > 0 }

// amplifier gives A0 and 1/ωgb (s/rad). One figure alone leaves the other ideal: 120 dB of gain, unlimited bandwidth.
func (p *Parts) amplifier() (gain, slope float64) {
	gain = p.OpenLoopGain
	if gain == 0 {
		gain = 1e6
	}
	if p.GainBandwidth > 0 {
		slope = 1 / (2 * math.Pi * p.GainBandwidth)
	}
	return gain, slope
}

// feedback gives C2 and R2 as the kind uses them: type-1 has neither.
func (p *Parts) feedback() (c2, r2 float64) {
	if p.Kind == Type1 {
		return 0, 0
	}
	return p.RolloffCapacitor, p.FeedbackResistor
}

// lead gives C3 and R3 as the kind uses them: type-1 and type-2 have neither.
func (p *Parts) lead() (c3, r3 float64) {
	if p.Kind == Type1 || p.Kind == Type2 || p.LeadCapacitor == 0 {
		return 0, 0
	}
	return p.LeadCapacitor, p.LeadResistor
}

// realRoot is the root of 1 + s·tau, rad/s.
func realRoot(tau float64) complex128 { return complex(-1/tau, 0) }

// series is the capacitance of two capacitors in series.
func series(a, b float64) float64 { return a / (a + b) * b }

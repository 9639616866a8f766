package network

import (
	"math"

	"halfplane/analysis/transfer"
)

// optocoupler gives the shunt regulator with an optocoupler (theory sheet section 7):
//
//	H = CTR·Rpu/Rled · (1 + s·(R1+R2)·C1)/(s·R1·C1) / ((1 + s·Rpu·C2)·(1 + s/ωopto))
//
// The LED hangs on the output, so the output also acts directly: the "1 +" of 1 + Zf/R1, the fast lane. On a fixed rail
// (led-supply: fixed) that lane is gone and Zf/R1 = (1 + s·R2·C1)/(s·R1·C1) remains.
func optocoupler(p *Parts, f *transfer.Function) {
	r1, r2, c1 := p.UpperResistor, p.FeedbackResistor, p.IntegratorCapacitor
	f.Gain = p.CurrentTransferRatio * p.PullUpResistor / p.LEDResistor / (r1 * c1)
	f.Integrators = 1
	if !p.FixedLEDSupply {
		r2 += r1
	}
	if r2 > 0 {
		f.Zeros = append(f.Zeros, realRoot(r2*c1))
	}
	if p.RolloffCapacitor > 0 {
		f.Poles = append(f.Poles, realRoot(p.PullUpResistor*p.RolloffCapacitor))
	}
	if p.OptocouplerPole > 0 {
		f.Poles = append(f.Poles, complex(-2*math.Pi*p.OptocouplerPole, 0))
	}
}

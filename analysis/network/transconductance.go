package network

import "halfplane/analysis/transfer"

// transconductor gives H = gm·Zc·RL/(RL + Zi), Zc = ro ∥ (R2 + 1/sC1) ∥ 1/sC2 (theory sheet section 7):
//
//	H = gm·RL·Nf·Ny / ((Df + Nf/ro)·(Dy + RL·Ny))
//
// The second factor of the denominator is linear, the first a quadratic (an integrator and one pole without output resistance).
// Unlike around an op-amp the lower resistor divides here.
func transconductor(p *Parts, f *transfer.Function) {
	r1, rl, r2, c1, c2 := p.UpperResistor, p.LowerResistor, p.FeedbackResistor, p.IntegratorCapacitor, p.RolloffCapacitor
	f.Gain = p.Transconductance * rl / (r1 + rl)
	f.Zeros = append(f.Zeros, realRoot(r2*c1))
	if ro := p.OutputResistance; ro > 0 {
		// Df + Nf/ro = (1 + s·(ro·(C1 + C2) + R2·C1) + s²·ro·R2·C1·C2)/ro
		f.Gain *= ro
		f.Poles = appendQuadratic(f.Poles, ro*(c1+c2)+r2*c1, ro*r2*c1*c2)
	} else {
		f.Gain /= c1 + c2
		f.Integrators = 1
		if c2 > 0 {
			f.Poles = append(f.Poles, realRoot(r2*series(c1, c2)))
		}
	}
	if c3, r3 := p.lead(); c3 > 0 {
		// Dy + RL·Ny = (R1 + RL)·(1 + s·C3·(R3 + R1∥RL))
		f.Zeros = append(f.Zeros, realRoot((r1+r3)*c3))
		f.Poles = append(f.Poles, realRoot(c3*(r3+r1/(r1+rl)*rl)))
	}
}

// appendQuadratic appends the roots of 1 + b·s + a·s², a and b not negative; a = 0 leaves one root.
func appendQuadratic(roots []complex128, b, a float64) []complex128 {
	switch {
	case a > 0:
		x, y := transfer.Quadratic(a, b, 1)
		return append(roots, x, y)
	case b > 0:
		return append(roots, realRoot(b))
	}
	return roots
}

package plant

import "math"

// solveDiscontinuous fills out in discontinuous conduction. ccm is the continuous solution that was found impossible; its duty bounds the search.
// Sepic, cuk and zeta get the loss-free operating point and no small-signal model; so does a load that draws nothing.
func (s *Stage) solveDiscontinuous(c *Circuit, ccm *steady, out *Solution, shown bool) error {
	out.Mode = Discontinuous
	if s.Load == 0 {
		out.Duty, out.InductorCurrent, out.InductorRipple, out.InductorPeak = 0, 0, 0, 0
		return nil
	}
	if s.Second.Inductance > 0 {
		s.discontinuousOfTwo(out)
		return nil
	}
	p, ok := s.pulse(ccm.duty)
	if !ok {
		return ErrUnreachable
	}
	out.Duty = p.duty
	out.InductorCurrent, out.InductorRipple = p.current/s.Phases, p.peak/s.Phases
	out.InductorPeak = out.InductorRipple
	out.HasModel = true
	out.ModulatorGain = modulatorGain(&c.Modulator, c.InputVoltage)
	m := s.averagePulse(p)
	if shown {
		if err := s.bareResonanceOfPulse(p, m, out); err != nil {
			return err
		}
	}
	if err := s.pulseModel(c, p, m, out); err != nil {
		return err
	}
	if s.HasFilter && shown {
		if err := s.filterRatiosOfPulse(c, p, out); err != nil {
			return err
		}
	}
	return finishControl(out)
}

// discontinuousOfTwo fills duty and currents of a two-inductor topology from its energy balance without conduction losses but with
// the rectifier's drop: ½ (Vg d T)²/(L1∥L2) per period is what load and rectifier take, (V+VF) I T.
func (s *Stage) discontinuousOfTwo(out *Solution) {
	taken := (s.Output + s.Drop) * s.Load
	d := math.Sqrt(2*s.Inductance*s.FilterFrequency*taken) / s.Input
	fall := d * s.Input / (s.Output + s.Drop) // the rectifier's share of the period
	out.Duty = d
	describe := func(mean, inductance float64) (average, ripple, peak float64) {
		ripple = s.Input * d * s.Period / inductance
		// The current rises from and falls back to a floor that the third interval holds.
		peak = mean + ripple*(1-(d+fall)/2)
		return mean / s.Phases, ripple / s.Phases, peak / s.Phases
	}
	out.InductorCurrent, out.InductorRipple, out.InductorPeak = describe(taken/s.Input, s.First.Inductance)
	out.SecondCurrent, out.SecondRipple, out.SecondPeak = describe(s.Load, s.Second.Inductance)
}

// pulse is the operating point of discontinuous conduction.
type pulse struct {
	steady
	peak float64 // A, of the inductor current
	fall float64 // d2: the fraction of the period while the current falls
}

// pulse finds the operating point (Sun, Mitchell, Greuel, Krein, Bass, "Averaged modeling of PWM converters operating in discontinuous
// conduction mode", IEEE Trans. Power Electronics 16(4), 2001; theory sheet section 5): for a duty d the peak current is
//
//	ipk = d T α1/(1 − a11 d T/2),  α1 the on-slope at zero current, a11 its change per ampere,
//
// the load's charge balance gives d2, and the inductor's mean voltage with the current at ipk/2 must vanish. That excess rises with d
// and is below zero for a small d.
func (s *Stage) pulse(bound float64) (pulse, bool) {
	held := *s // at the operating point the load is a current
	held.Conductance = 0
	l := held.layout()
	on, off := held.interval(&l, onPart), held.interval(&l, offPart)
	at := func(d float64) (pulse, float64) { return held.pulseAt(&l, &on, &off, d) }
	low, high := bound, bound
	var fLow, fHigh float64
	// The two models meet at the boundary but not exactly: look a little further up where the bound is not beyond the root.
	for _, fHigh = at(high); !(fHigh > 0); _, fHigh = at(high) {
		low = high
		if high *= 1.02; !(high < 1) {
			return pulse{}, false
		}
	}
	for range 1100 {
		low /= 2
		if _, fLow = at(low); fLow < 0 {
			break
		}
	}
	if !(fLow < 0) {
		return pulse{}, false
	}
	d := crossing(low, fLow, high, fHigh, func(d float64) float64 { _, f := at(d); return f })
	p, _ := at(d)
	return p, p.peak > 0 && p.fall > 0
}

// pulseAt returns the state at a duty and the mean voltage excess of the inductor as a current slope, A/s.
func (s *Stage) pulseAt(l *layout, on, off *interval, d float64) (pulse, float64) {
	p := pulse{steady: steady{duty: d, terminal: s.Input}}
	excess := 0.0
	for range 100 {
		w := s.values(l, &p.steady)
		w[0] = 0
		p.peak = d * s.Period * on.dx[0].dot(&w) / (1 - on.dx[0][0]*d*s.Period/2)
		p.fall = (2*s.Load/p.peak - s.On.B*d) / s.Off.B
		w[0] = p.peak / 2
		excess = d*on.dx[0].dot(&w) + p.fall*off.dx[0].dot(&w)
		p.current = (d + p.fall) * p.peak / 2
		p.drawn = s.Drive * (s.On.A*d + s.Off.A*p.fall) * p.peak / 2
		before := p.terminal
		p.terminal = s.Input - s.FilterInductor.Resistance*p.drawn
		if math.Abs(p.terminal-before) <= 1e-15*s.Input {
			break
		}
	}
	return p, excess
}

// crossing closes a bracket [a, b] with f(a) < 0 < f(b) by false position with halved weights (the Illinois rule, common practice), falling
// back to bisection where a value is not finite.
func crossing(a, fa, b, fb float64, f func(float64) float64) float64 {
	side := 0
	for range 200 {
		m := a - fa*(b-a)/(fb-fa)
		if !(m > a && m < b) {
			m = a + (b-a)/2
			if m <= a || m >= b {
				return m
			}
		}
		fm := f(m)
		switch {
		case fm == 0:
			return m
		case fm < 0:
			a, fa = m, fm
			if side < 0 {
				fb /= 2
			}
			side = -1
		default:
			b, fb = m, fm
			if side > 0 {
				fa /= 2
			}
			side = 1
		}
		if b-a <= 1e-14*b {
			break
		}
	}
	return a - fa*(b-a)/(fb-fa)
}

// averagePulse returns the full-order model: the derivative of the averaged equations
//
//	d2 = 2 i/ipk − d,  x' = d (A1 xc + B1 u) + d2 (A2 xc + B2 u) + (1−d−d2)(A3 x0 + B3 u)
//
// at the operating point, xc the state with i replaced by ipk/2 and x0 with i replaced by 0. The chain rule runs through ipk and d2.
func (s *Stage) averagePulse(p pulse) *linear {
	l := s.layout()
	on, off, idle := s.interval(&l, onPart), s.interval(&l, offPart), s.interval(&l, idlePart)
	w := s.values(&l, &p.steady)
	i, d, t := w[0], p.duty, s.Period
	rest := w
	rest[0] = 0
	slope, damping := on.dx[0].dot(&rest), 1-on.dx[0][0]*d*t/2
	peak := d * t * slope / damping
	fall := 2*i/peak - d

	var peakBy, fallBy row
	for j := range columns {
		if j != 0 {
			peakBy[j] = d * t / damping * on.dx[0][j]
		}
		fallBy[j] = -2 * i / (peak * peak) * peakBy[j]
	}
	fallBy[0] = 2 / peak
	peakByDuty := t * slope / (damping * damping)
	fallByDuty := -2*i/(peak*peak)*peakByDuty - 1

	m := &linear{layout: l}
	// With (d+d2) ipk/2 = i, a quantity with rows r1, r2, r3 is (d r1 + d2 r2 + d3 r3)·x0 + d (r1−r2)[i] ipk/2 + r2[i] i: written so, what does
	// not depend on the duty cancels exactly.
	derive := func(r1, r2, r3 *row) (out row, duty float64) {
		step := (r1[0] - r2[0]) * d / 2
		atRest := r3.dot(&rest)
		perFall := r2.dot(&rest) - atRest
		for j := range columns {
			if j != 0 {
				out[j] = d*r1[j] + fall*r2[j] + (1-d-fall)*r3[j]
			}
			out[j] += step*peakBy[j] + perFall*fallBy[j]
		}
		out[0] += r2[0]
		return out, r1.dot(&rest) - atRest + perFall*fallByDuty + (r1[0]-r2[0])*peak/2 + step*peakByDuty
	}
	for k := range l.order {
		m.a[k], m.duty[k] = derive(&on.dx[k], &off.dx[k], &idle.dx[k])
	}
	m.vo.row, m.vo.duty = derive(&on.vo, &off.vo, &idle.vo)
	m.vt.row, m.vt.duty = derive(&on.vt, &off.vt, &idle.vt)
	m.ig.row, m.ig.duty = derive(&on.ig, &off.ig, &idle.ig)
	s.senseRows(m)
	return m
}

// pulseModel fills control function, line gain and output resistance. Under peak current mode the current starts from zero in every
// period and is no feedback: d = Fm (vc − D T Ri rise), Fm with the slope ipk/(D T).
func (s *Stage) pulseModel(c *Circuit, p pulse, m *linear, out *Solution) error {
	if c.Modulator.Scheme != PeakCurrentMode {
		return s.controlModel(c, &p.steady, m, out)
	}
	k := m.control()
	if err := k.prepare(); err != nil {
		return err
	}
	zeros, err := k.zeros()
	if err != nil {
		return err
	}
	s.currentLoop(c, &p.steady, p.peak/(p.duty*s.Period), out)
	terms := s.pulseTerms(p, out.Current)
	var f [maxOrder]float64
	for j := range m.order {
		f[j] = terms.gain * terms.rise * m.rise.row[j]
	}
	poles, _, err := k.closedRoots(&f, 1-terms.gain*terms.rise*m.rise.duty)
	if err != nil {
		return err
	}
	control, line, ohms := m.steadyClosed(&k, &terms)
	store(&out.Control, control, poles, zeros)
	setOutputs(out, line, ohms)
	return nil
}

// pulseTerms are the constants of peak current mode in discontinuous conduction.
func (s *Stage) pulseTerms(p pulse, r *CurrentLoop) loopTerms {
	return loopTerms{gain: 1 / ((r.OnSlope + r.ExternalSlope) * s.Period), rise: -p.duty * s.Period * s.Sense}
}

// bareResonanceOfPulse is bareResonance in discontinuous conduction: the stage without its filter, fed with the terminal's voltage.
func (s *Stage) bareResonanceOfPulse(p pulse, m *linear, out *Solution) error {
	if s.HasFilter {
		bare := *s
		bare.HasFilter = false
		bare.Input = p.terminal
		m = bare.averagePulse(p)
	}
	a := m.states()
	poles, err := a.eigenvalues(m.order)
	if err != nil {
		return err
	}
	out.Resonance, out.Quality = resonanceOf(poles)
	return nil
}

package plant

import "math"

// loopTerms are the constants of peak current mode at one operating point (R. B. Ridley, "A new, continuous-time model for current-mode control",
// IEEE Trans. Power Electronics 6(2), 1991; theory sheet section 6):
//
//	d = Fm (vc − Ri He(s) is + kf'·rise + kr'·fall),  Fm = 1/((Sn+Se) T),  He = 1 − s T/2 + s²/ωn²,  ωn = π/T
//
// with the feed-forward gains on the ideal slopes of the sensed current: kf' = −D T Ri (1 − D/2), kr' = D'² T Ri/2.
type loopTerms struct {
	gain       float64 // Fm, 1/V
	sense      float64 // Ri, Ω; 0 in discontinuous conduction, where the current is no feedback
	rise, fall float64 // kf', kr', V per (A/s)
}

// currentLoop fills the slopes at the comparator for a mean on-slope of the sensed current (A/s of the equivalent phase).
func (s *Stage) currentLoop(c *Circuit, x *steady, slope float64, out *Solution) {
	r := &CurrentLoop{HalfFrequencyQuality: math.NaN()}
	r.OnSlope = s.Sense * slope
	r.ExternalSlope = c.Modulator.SlopeCompensation + s.MagnetizingSlope*x.terminal
	r.SlopeRatio = 1 + r.ExternalSlope/r.OnSlope
	r.OffDutyProduct = r.SlopeRatio * (1 - x.duty)
	out.Current = r
}

// loopTerms are the constants of peak current mode in continuous conduction.
func (s *Stage) loopTerms(x *steady, r *CurrentLoop) loopTerms {
	d := x.duty
	return loopTerms{gain: 1 / ((r.OnSlope + r.ExternalSlope) * s.Period), sense: s.Sense,
		rise: -d * s.Period * s.Sense * (1 - d/2), fall: (1 - d) * (1 - d) * s.Period * s.Sense / 2}
}

// currentMode fills control function, line gain and output resistance of peak current mode in continuous conduction. The sampling polynomial He
// has the second derivative of the current; as the current's derivative contains the duty itself, the modulator's equation becomes a differential
// equation for the duty, which is so one more state and the poles are plain eigenvalues:
//
//	(Ri cb/ωn²) d' = vc − d/Fm − Ri (c x − (T/2)(cA x + cb d) + (cA² x + cAb d)/ωn²) + (kf' rise + kr' fall)
//
// with c the row of the sensed current and b the duty column. The zeros are those of the duty's channel.
func (s *Stage) currentMode(c *Circuit, x *steady, m *linear, k *channel, zeros []complex128, out *Solution) error {
	s.currentLoop(c, x, x.slope+x.slope2, out)
	out.Current.HalfFrequencyQuality = 1 / (math.Pi * (out.Current.OffDutyProduct - 0.5))
	terms := s.loopTerms(x, out.Current)
	n := m.order
	wide := k.a
	c0 := m.sensed
	var c1, c2 [maxStates]float64
	cb, cab := 0.0, 0.0
	for j := range n {
		for i := range n {
			c1[j] += c0[i] * m.a[i][j]
		}
	}
	for j := range n {
		for i := range n {
			c2[j] += c1[i] * m.a[i][j]
		}
		cb += c0[j] * m.duty[j]
		cab += c1[j] * m.duty[j]
	}
	wn2 := math.Pi * math.Pi / (s.Period * s.Period)
	rate := wn2 / (terms.sense * cb)
	for j := range n {
		wide[j][n] = m.duty[j]
		wide[n][j] = rate * (-terms.sense*(c0[j]-s.Period/2*c1[j]+c2[j]/wn2) + terms.rise*m.rise.row[j] + terms.fall*m.fall.row[j])
	}
	wide[n][n] = rate * (-1/terms.gain - terms.sense*(-s.Period/2*cb+cab/wn2) + terms.rise*m.rise.duty + terms.fall*m.fall.duty)
	poles, err := wide.eigenvalues(n + 1)
	if err != nil {
		return err
	}
	control, line, ohms := m.steadyClosed(k, &terms)
	store(&out.Control, control, poles, zeros)
	setOutputs(out, line, ohms)
	return nil
}

// steadyClosed returns the direct-current response of the output voltage to control voltage, input voltage and load current (as output
// resistance) with the modulator's law d = Fm (vc − Ri is + kf'·rise + kr'·fall) around the model.
func (m *linear) steadyClosed(k *channel, t *loopTerms) (control, line, ohms float64) {
	law := row{}
	law.add(-t.sense, &m.sensed)
	law.add(t.rise, &m.rise.row)
	law.add(t.fall, &m.fall.row)
	all := output{row: law, duty: t.rise*m.rise.duty + t.fall*m.fall.duty}
	inner := 1/t.gain - m.steadyDuty(&k.invB, &all)
	control = k.dcGain / inner
	line = m.steadyGain(&k.inv, &m.vo.row, colInput) + control*m.steadyGain(&k.inv, &law, colInput)
	ohms = -m.steadyGain(&k.inv, &m.vo.row, colLoad) - control*m.steadyGain(&k.inv, &law, colLoad)
	return control, line, ohms
}

// setOutputs stores line gain (as a magnitude) and output resistance.
func setOutputs(out *Solution, line, ohms float64) {
	out.LineGain, out.OutputResistance = math.Abs(line), ohms
}

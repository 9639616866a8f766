package plant

// generalModel fills the small-signal model of continuous conduction for every order, with or without input filter and current loop.
func (s *Stage) generalModel(c *Circuit, x *steady, out *Solution, shown bool) error {
	m := s.average(x)
	if shown {
		if err := s.bareResonance(x, m, out); err != nil {
			return err
		}
	}
	if err := s.controlModel(c, x, m, out); err != nil {
		return err
	}
	if s.HasFilter && shown {
		return s.filterRatios(c, x, out)
	}
	return nil
}

// controlModel turns a linear model into control function, line gain and output resistance under the circuit's modulator.
func (s *Stage) controlModel(c *Circuit, x *steady, m *linear, out *Solution) error {
	k := m.control()
	if err := k.prepare(); err != nil {
		return err
	}
	zeros, err := k.zeros()
	if err != nil {
		return err
	}
	if c.Modulator.Scheme == PeakCurrentMode {
		return s.currentMode(c, x, m, &k, zeros, out)
	}
	line, ohms := m.steadyGain(&k.inv, &m.vo.row, colInput), -m.steadyGain(&k.inv, &m.vo.row, colLoad)
	setOutputs(out, line, ohms)
	var f [maxOrder]float64
	h := 1 + s.feedForward(c, x, m, &f)
	return k.closedForm(&f, h, zeros, out)
}

// feedForward adds the extra path of feed-forward behind an input filter, which senses the converter's own terminal: the duty falls by D/vt for a
// rise of the terminal voltage vt (theory sheet section 6). It changes f and returns what it adds to h of d = (command + f·x)/h.
func (s *Stage) feedForward(c *Circuit, x *steady, m *linear, f *[maxOrder]float64) float64 {
	if !c.Modulator.FeedForward || !s.HasFilter {
		return 0
	}
	k := x.duty / x.terminal
	for i := range m.order {
		f[i] -= k * m.vt.row[i]
	}
	return k * m.vt.duty
}

// closedForm stores the control function when d = (command + f·x)/h: poles of A + b f/h, the zeros of the open channel, and the
// direct-current gain G(0)/(h + f A⁻¹ b).
func (k *channel) closedForm(f *[maxOrder]float64, h float64, zeros []complex128, out *Solution) error {
	poles, gain, err := k.closedRoots(f, h)
	if err != nil {
		return err
	}
	store(&out.Control, gain, poles, zeros)
	return nil
}

// closedRoots returns poles and direct-current gain when d = (command + f·x)/h.
func (k *channel) closedRoots(f *[maxOrder]float64, h float64) ([]complex128, float64, error) {
	a := k.closeDuty(f, h)
	poles, err := a.eigenvalues(k.n)
	denominator := h
	for i := range k.n {
		denominator += f[i] * k.invB[i]
	}
	return poles, k.dcGain / denominator, err
}

// bareResonance finds resonance and quality of the power stage alone, without input filter and current loop, at the operating duty.
func (s *Stage) bareResonance(x *steady, m *linear, out *Solution) error {
	a, n := m.states(), m.order
	if s.HasFilter {
		bare := *s
		bare.HasFilter = false
		b := bare.average(x)
		a, n = b.states(), b.order
	}
	poles, err := a.eigenvalues(n)
	if err != nil {
		return err
	}
	out.Resonance, out.Quality = resonanceOf(poles)
	return nil
}

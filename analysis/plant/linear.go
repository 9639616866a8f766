package plant

// output is a quantity of the linear model: a row over states and inputs, and its direct response to the duty.
type output struct {
	row
	duty float64
}

// linear is a small-signal model: derivative of every state over states and inputs, the duty column, and the outputs that the
// modulator, the loop and the input filter's ratios need.
type linear struct {
	layout
	a          [maxStates]row
	duty       [maxStates]float64
	vo, vt, ig output
	sensed     row    // current that the modulator senses
	rise, fall output // A/s: ideal on-slope and off-slope (counted falling) of the sensed current
}

// average returns the model of continuous conduction around the averaged state x: state-space averaging (Middlebrook & Ćuk, IEEE PESC 1976),
// duty column (A1−A2)X + (B1−B2)U, duty feed-through likewise.
func (s *Stage) average(x *steady) *linear {
	l := s.layout()
	on, off := s.interval(&l, onPart), s.interval(&l, offPart)
	w := s.values(&l, x)
	m := &linear{layout: l}
	blend := func(r1, r2 *row) (mean row, step float64) {
		mean.add(x.duty, r1)
		mean.add(1-x.duty, r2)
		diff := *r1
		diff.add(-1, r2)
		return mean, diff.dot(&w)
	}
	for i := range l.order {
		m.a[i], m.duty[i] = blend(&on.dx[i], &off.dx[i])
	}
	m.vo.row, m.vo.duty = blend(&on.vo, &off.vo)
	m.vt.row, m.vt.duty = blend(&on.vt, &off.vt)
	m.ig.row, m.ig.duty = blend(&on.ig, &off.ig)
	s.senseRows(m)
	return m
}

// values returns states and inputs at the averaged state: every branch at its node's mean voltage.
func (s *Stage) values(l *layout, x *steady) (w row) {
	w[0] = x.current
	if s.Second.Inductance > 0 {
		w[l.second], w[l.coupling] = x.second, x.coupling
	}
	for k := range s.branchCount {
		w[l.bank+k] = s.Output
	}
	if s.HasFilter {
		w[l.series] = x.drawn
		for k := range s.shuntCount {
			w[l.shunt+k] = x.terminal
		}
	}
	w[colInput], w[colLoad], w[colOne] = s.Input, s.Load-s.Conductance*s.Output, 1
	return w
}

// senseRows fills the sensed current and its ideal slopes on averaged voltages (theory sheet section 6).
func (s *Stage) senseRows(m *linear) {
	m.sensed = unit(0)
	combine := func(o *output, of *output, k float64) {
		o.add(k, &of.row)
		o.duty += k * of.duty
	}
	if s.Second.Inductance == 0 {
		combine(&m.rise, &m.vt, s.On.A*s.Drive/s.Inductance)
		combine(&m.rise, &m.vo, -s.On.B/s.Inductance)
		combine(&m.fall, &m.vo, s.Off.B/s.Inductance)
		combine(&m.fall, &m.vt, -s.Off.A*s.Drive/s.Inductance)
		return
	}
	m.sensed[m.second] = 1
	y1, y2 := 1/s.First.Inductance, 1/s.Second.Inductance
	m.rise.row[m.coupling] = y2
	m.fall.row[m.coupling] = y1
	combine(&m.rise, &m.vt, y1)
	combine(&m.fall, &m.vo, y2)
	switch s.Family {
	case SepicLike:
		combine(&m.fall, &m.vo, y1)
		combine(&m.fall, &m.vt, -y1)
	case CukLike:
		combine(&m.rise, &m.vo, -y2)
		combine(&m.fall, &m.vt, -y1)
	case ZetaLike:
		combine(&m.rise, &m.vt, y2)
		combine(&m.rise, &m.vo, -y2)
	}
}

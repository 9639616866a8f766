package plant

// part is a piece of the switching period.
type part int

const (
	onPart part = iota + 1
	offPart
	idlePart // discontinuous conduction: no inductor current, capacitors only
)

// interval holds the equations of one part of the period as rows over states and inputs: the derivative of every state, the output voltage, the voltage at
// the converter's input and the current drawn there (theory sheet section 2).
type interval struct {
	dx         [maxStates]row
	vo, vt, ig row
}

// interval builds the equations of one part.
func (s *Stage) interval(l *layout, p part) (m interval) {
	into, drawn := s.currents(l, p)
	m.ig = drawn
	into[colLoad]--
	m.vo = node(s.Branches(), l.bank, &into, s.Conductance, &m.dx)
	m.vt = unit(colInput)
	if s.HasFilter {
		left := unit(l.series)
		left.add(-1, &drawn)
		m.vt = node(s.shunts[:s.shuntCount], l.shunt, &left, 0, &m.dx)
		d := &m.dx[l.series]
		*d = unit(colInput)
		d[l.series] -= s.FilterInductor.Resistance
		d.add(-1, &m.vt)
		d.scale(1 / s.FilterInductor.Inductance)
	}
	switch {
	case p == idlePart:
	case s.Second.Inductance > 0:
		s.twoInductors(l, p, &m)
	default:
		k := s.Off
		if p == onPart {
			k = s.On
		}
		d := &m.dx[0]
		d.add(k.A*s.Drive, &m.vt)
		d.add(-k.B, &m.vo)
		d[0] -= k.R
		d[colOne] -= k.C * s.Drop
		d.scale(1 / s.Inductance)
	}
	return m
}

// currents returns what flows into the output node and what is drawn from the input.
func (s *Stage) currents(l *layout, p part) (into, drawn row) {
	if p == idlePart {
		return into, drawn
	}
	switch s.Family {
	case SepicLike:
		drawn[0] = 1
		if p == offPart {
			into[0], into[l.second] = 1, 1
		}
	case CukLike:
		drawn[0], into[l.second] = 1, 1
	case ZetaLike:
		into[l.second] = 1
		if p == onPart {
			drawn[0], drawn[l.second] = 1, 1
		}
	default:
		k := s.Off
		if p == onPart {
			k = s.On
		}
		into[0], drawn[0] = k.B, k.A*s.Drive
	}
	return into, drawn
}

// node fills the derivatives of the branch voltages at a node, whose columns start at first, and returns the node's voltage. A current
// (inject) flows in, a conductance g stands across. The branch currents are written so that the voltages' differences, not the
// voltages, carry the small resistances:
//
//	v = (inject + Σ vk/rk)/(g + Σ 1/rk),  rk Ck dvk/dt = v − vk = (inject − g vk + Σ_j (vj − vk)/rj)/(g + Σ 1/rj)
//
// A first branch without resistance holds the node: v = v0, C0 dv0/dt = inject − g v0 − Σ (v0 − vk)/rk.
func node(branches []Branch, first int, inject *row, g float64, dx *[maxStates]row) row {
	if branches[0].R == 0 {
		d := &dx[first]
		*d = *inject
		d[first] -= g
		for k := 1; k < len(branches); k++ {
			b := branches[k]
			d[first] -= 1 / b.R
			d[first+k] += 1 / b.R
			dx[first+k][first] = 1 / (b.R * b.C)
			dx[first+k][first+k] = -1 / (b.R * b.C)
		}
		d.scale(1 / branches[0].C)
		return unit(first)
	}
	total := g
	for _, b := range branches {
		total += 1 / b.R
	}
	v := *inject
	for k, b := range branches {
		v[first+k] += 1 / b.R
		d := &dx[first+k]
		*d = *inject
		d[first+k] -= g
		for j, other := range branches {
			if j != k {
				d[first+j] += 1 / other.R
				d[first+k] -= 1 / other.R
			}
		}
		d.scale(1 / (total * b.R * b.C))
	}
	v.scale(1 / total)
	return v
}

// twoInductors fills the derivatives of both inductor currents and of the coupling voltage of sepic, cuk and zeta.
func (s *Stage) twoInductors(l *layout, p part, m *interval) {
	first, second, coupling := &m.dx[0], &m.dx[l.second], &m.dx[l.coupling]
	first[0] -= s.First.Resistance
	second[l.second] -= s.Second.Resistance
	if s.Family != SepicLike {
		second.add(-1, &m.vo)
	}
	if p == onPart {
		for _, d := range []*row{first, second} {
			d[0] -= s.SwitchResistance
			d[l.second] -= s.SwitchResistance
		}
		first.add(1, &m.vt)
		second[l.coupling]++
		second[l.second] -= s.Coupling.R
		if s.Family == ZetaLike {
			second.add(1, &m.vt)
		}
		coupling[l.second] = -1
	} else {
		for _, d := range []*row{first, second} {
			d[0] -= s.RectifierResistance
			d[l.second] -= s.RectifierResistance
			d[colOne] -= s.Drop
		}
		first[l.coupling]--
		first[0] -= s.Coupling.R
		if s.Family != ZetaLike {
			first.add(1, &m.vt)
		}
		if s.Family == SepicLike {
			first.add(-1, &m.vo)
			second.add(-1, &m.vo)
		}
		coupling[0] = 1
	}
	first.scale(1 / s.First.Inductance)
	second.scale(1 / s.Second.Inductance)
	coupling.scale(1 / s.Coupling.C)
}

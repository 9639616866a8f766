package plant

// Family is the set of equations that a topology follows on the output side.
type Family int

const (
	BuckLike Family = iota + 1
	BoostLike
	BuckBoostLike
	SepicLike
	CukLike
	ZetaLike
)

// Family returns the equations that the topology follows once its transformer is reflected; 0 for an unknown topology.
func (t Topology) Family() Family {
	switch t {
	case Buck, Forward, TwoSwitchForward, PushPull, HalfBridge, FullBridge:
		return BuckLike
	case Boost, IsolatedBoost:
		return BoostLike
	case BuckBoost, TwoSwitchBuckBoost, Flyback:
		return BuckBoostLike
	case Sepic:
		return SepicLike
	case Cuk:
		return CukLike
	case Zeta:
		return ZetaLike
	}
	return 0
}

// Isolated reports whether the topology has a transformer (or coupled windings, flyback), so that turns count.
func (t Topology) Isolated() bool {
	switch t {
	case Flyback, Forward, TwoSwitchForward, PushPull, HalfBridge, FullBridge, IsolatedBoost:
		return true
	}
	return false
}

// TwoInductor reports whether the topology has a second inductor and a coupling capacitor.
func (t Topology) TwoInductor() bool { return t == Sepic || t == Cuk || t == Zeta }

// HasDutyPeak reports whether losses make the conversion ratio peak below full duty: all but the buck family.
func (t Topology) HasDutyPeak() bool { f := t.Family(); return f != 0 && f != BuckLike }

// FilterMultiple is the number of output filter periods in one period of a switch: 2 for push-pull, half-bridge, full-bridge and
// isolated-boost, 1 otherwise.
func (t Topology) FilterMultiple() float64 {
	switch t {
	case PushPull, HalfBridge, FullBridge, IsolatedBoost:
		return 2
	}
	return 1
}

// rectified reports whether a secondary rectifier carries the inductor current in both intervals.
func (t Topology) rectified() bool { return t.Family() == BuckLike && t != Buck }

package plant

// The names of the spec format, at the index of the value; index 0 is no value.
var (
	topologyNames = [...]string{Buck: "buck", Boost: "boost", BuckBoost: "buck-boost", TwoSwitchBuckBoost: "two-switch-buck-boost",
		Sepic: "sepic", Cuk: "cuk", Zeta: "zeta", Flyback: "flyback", Forward: "forward", TwoSwitchForward: "two-switch-forward",
		PushPull: "push-pull", HalfBridge: "half-bridge", FullBridge: "full-bridge", IsolatedBoost: "isolated-boost"}
	behaviourNames = [...]string{Resistive: "resistive", ConstantCurrent: "constant-current", ConstantPower: "constant-power"}
	schemeNames    = [...]string{VoltageMode: "voltage-mode", PeakCurrentMode: "peak-current-mode"}
	modeNames      = [...]string{Continuous: "ccm", Discontinuous: "dcm"}
)

// name returns the entry of a value, "unknown" outside the list.
func name(names []string, value int) string {
	if value < 1 || value >= len(names) {
		return "unknown"
	}
	return names[value]
}

// find returns the value with that name.
func find(names []string, text string) (int, bool) {
	for value, n := range names {
		if value > 0 && n == text {
			return value, true
		}
	}
	return 0, false
}

// String returns the spec format's name.
func (t Topology) String() string { return name(topologyNames[:], int(t)) }

// String returns the spec format's name.
func (b Behaviour) String() string { return name(behaviourNames[:], int(b)) }

// String returns the spec format's name.
func (s Scheme) String() string { return name(schemeNames[:], int(s)) }

// String returns "ccm" or "dcm".
func (m Mode) String() string { return name(modeNames[:], int(m)) }

// ParseTopology finds the topology with a spec format's name.
func ParseTopology(text string) (Topology, bool) {
	v, ok := find(topologyNames[:], text)
	return Topology(v), ok
}

// ParseBehaviour finds the load behaviour with a spec format's name.
func ParseBehaviour(text string) (Behaviour, bool) {
	v, ok := find(behaviourNames[:], text)
	return Behaviour(v), ok
}

// ParseScheme finds the modulator scheme with a spec format's name.
func ParseScheme(text string) (Scheme, bool) {
	v, ok := find(schemeNames[:], text)
	return Scheme(v), ok
}

// Topologies lists every topology in the order of the spec format.
func Topologies() []Topology {
	all := make([]Topology, 0, len(topologyNames)-1)
	for t := Buck; t <= IsolatedBoost; t++ {
		all = append(all, t)
	}
	return all
}

var familyNames = [...]string{BuckLike: "buck", BoostLike: "boost", BuckBoostLike: "buck-boost", SepicLike: "sepic", CukLike: "cuk", ZetaLike: "zeta"}

// String returns the name of the family's plainest topology.
func (f Family) String() string { return name(familyNames[:], int(f)) }

package plant

// Topology names a converter's power stage. Values start at 1; String gives the spec format's name.
type Topology int

const (
	Buck Topology = iota + 1
	Boost
	BuckBoost
	TwoSwitchBuckBoost
	Sepic
	Cuk
	Zeta
	Flyback
	Forward
	TwoSwitchForward
	PushPull
	HalfBridge
	FullBridge
	IsolatedBoost
)

// Behaviour says how the load current answers a small change of the output voltage.
type Behaviour int

const (
	Resistive Behaviour = iota + 1
	ConstantCurrent
	ConstantPower
)

// Scheme is the way in which the control voltage sets the duty.
type Scheme int

const (
	VoltageMode Scheme = iota + 1
	PeakCurrentMode
)

// MaxBanks bounds the number of output capacitor banks of one design.
const MaxBanks = 8

// Winding is an inductor as written in the spec: on its own side, one phase.
type Winding struct {
	Inductance float64 // H
	Resistance float64 // Ω
}

// Bank is one bank of equal output capacitors as written: one piece, before bias derating.
type Bank struct {
	Capacitance float64 // F, one piece
	ESR         float64 // Ω, one piece
	Count       float64 // pieces in parallel
	Derating    []DeratingPoint
}

// DeratingPoint is one entry of a capacitor's bias table: at Voltage (V) the capacitance is Factor times the stated one.
type DeratingPoint struct{ Voltage, Factor float64 }

// Filter is an input filter as written. A zero Capacitance means that there is none; a zero DampingCapacitance that
// there is no damping branch.
type Filter struct {
	Inductance, Resistance, Capacitance, ESR, DampingResistance, DampingCapacitance float64
}

// Modulator is how the control voltage becomes duty, as written.
type Modulator struct {
	Scheme            Scheme
	RampAmplitude     float64 // V peak to peak, voltage mode; at nominal input with feed-forward
	FeedForward       bool
	NominalInput      float64 // V, for feed-forward: the design's nominal input
	CurrentSenseGain  float64 // V/A of the switch's own side
	SlopeCompensation float64 // V/s at the comparator
	ControlRatio      float64 // compensator output to comparator; 1 unless given
	Delay             float64 // s, acts on the loop
}

// Circuit is one power stage and its modulator at one exact assignment of every number: SI units, each value as it is
// written in a spec (the winding's own side, one piece, one phase, before bias derating). Reflect turns it into a Stage.
type Circuit struct {
	Topology              Topology
	Phases                int
	SwitchingFrequency    float64 // Hz, of one switch
	InputVoltage          float64 // V
	OutputVoltage         float64 // V, magnitude
	LoadCurrent           float64 // A, all phases
	Behaviour             Behaviour
	LoadCapacitance       float64 // F, 0: none
	LoadESR               float64 // Ω
	TurnsPrimary          float64 // 1 where not isolated
	TurnsSecondary        float64
	InductorOnPrimary     bool // inductor.side: primary
	Inductor              Winding
	SecondInductor        Winding // sepic, cuk, zeta
	Coupling              Bank    // sepic, cuk, zeta: coupling capacitor (Count 1)
	MagnetizingInductance float64 // H on the primary of a forward type, 0: none
	Banks                 []Bank
	SwitchResistance      float64 // Ω, all conducting switches in series, on the primary
	RectifierDrop         float64 // V
	RectifierResistance   float64 // Ω
	Synchronous           bool
	Filter                Filter
	Modulator             Modulator
}

package network

// Kind is a compensator network of the spec format; String gives its name there.
type Kind int

const (
	Type1 Kind = iota + 1
	Type2
	Type3
	Transconductance
	Optocoupler
	TransferFunction
	Digital
)

// Root is one zero or pole of a transfer-function network: a real one (Quality 0) or a pair of the given quality.
type Root struct {
	Frequency float64 // Hz; a negative real frequency is not allowed
	Quality   float64 // 0: a single real root
}

// Parts are the values of one compensator at one exact assignment, SI units, named as in the spec. Zero means absent
// where the format lets a part be left out.
type Parts struct {
	Kind                                                               Kind
	ReferenceVoltage                                                   float64
	UpperResistor, LowerResistor, FeedbackResistor                     float64 // R1, RL, R2
	IntegratorCapacitor, RolloffCapacitor                              float64 // C1, C2
	LeadResistor, LeadCapacitor                                        float64 // R3, C3
	GainBandwidth, OpenLoopGain                                        float64 // Hz, ratio; both 0: ideal; one alone: see spec-format
	Transconductance, OutputResistance                                 float64 // S, Ω
	LEDResistor, PullUpResistor, CurrentTransferRatio, OptocouplerPole float64
	PullUpVoltage, LEDSupplyVoltage                                    float64
	FixedLEDSupply                                                     bool    // led-supply: fixed
	Gain, Integrator, SenseGain                                        float64 // transfer-function; Integrator in Hz, 0: none
	Zeros, Poles                                                       []Root
	SamplingFrequency, Delay                                           float64
	Numerator, Denominator                                             []float64
}

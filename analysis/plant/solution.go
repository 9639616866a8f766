package plant

import "halfplane/analysis/transfer"

// Mode is the conduction mode of one corner.
type Mode int

const (
	Continuous    Mode = iota + 1 // "ccm"
	Discontinuous                 // "dcm"
)

// Solution is everything that the power stage says at one exact assignment. NaN stands for a figure that does not exist.
// Frequencies in Hz, poles and zeros in rad/s, currents of one phase on the output-filter side.
type Solution struct {
	Mode            Mode
	Duty            float64 // fraction of the filter's own period
	TurnsRatio      float64 // n = secondary/primary
	FilterFrequency float64 // Hz: the switching frequency or twice that
	InductorCurrent float64 // A average, one phase
	InductorRipple  float64 // A peak to peak, one phase
	SecondCurrent   float64 // A, two-inductor topologies, else NaN
	SecondRipple    float64
	InductorPeak    float64 // A, one phase, output side: average + ripple/2, or the ripple in discontinuous conduction
	SecondPeak      float64

	EffectiveInductance float64 // H, one phase, output side (two inductors: in parallel)
	StageInductance     float64 // H, EffectiveInductance/phases
	StageCapacitance    float64 // F, whole bank(s), derated
	StageESR            float64 // Ω, NaN with several banks

	HasModel         bool              // false: no small-signal model for this topology and mode (all below is unset)
	Control          transfer.Function // control to output as the loop sees it: Gvd per duty, or Gvc per control volt in current mode
	ModulatorGain    float64           // what multiplies Control and the compensator: control-ratio/ramp, or control-ratio in current mode
	ControlGain      float64           // |Control(0)|
	LineGain         float64           // |Gvg(0)| at constant duty, or constant control voltage in current mode
	Resonance        float64           // Hz, of the duty-to-output plant without input filter and current loop
	Quality          float64
	ESRZero          float64 // Hz, 1/(2π rc C), lowest of the banks'; NaN when no bank has ESR
	RHPZero          float64 // Hz, lowest |z|/2π over the zeros of Control with Re z > 0, NaN: none
	OutputResistance float64

	Current *CurrentLoop // peak current mode only
	Input   *InputFilter // with an input filter only
}

// CurrentLoop is the inner loop of peak current mode; slopes in V/s at the comparator.
type CurrentLoop struct {
	OnSlope, ExternalSlope float64
	SlopeRatio             float64 // mc = 1 + Se/Sn
	OffDutyProduct         float64 // mc·D′, subharmonic at or below 1/2
	HalfFrequencyQuality   float64 // 1/(π(mc·D′ − 1/2)); negative: unstable inner loop
}

// InputFilter holds the two Middlebrook ratios, each the largest magnitude up to half the filter frequency.
type InputFilter struct {
	ZoOverZn, ZoOverZd float64
	Quality            float64 // of the worst complex pole pair of the filter alone, NaN: none
}

// Ideal holds the loss-free closed forms of one circuit (theory sheet section 4). NaN: no closed form.
type Ideal struct {
	Duty, ControlGain, LineGain, Resonance, Quality, RHPZero, ESRZero float64
}

package rules

import "math"

// Every policy key, declared once: rules list the ones they use and read them through Case.threshold.
var (
	statedTolerance     = Threshold{"stated-tolerance", 0.05, "%"}
	setpointTolerance   = Threshold{"setpoint-tolerance", 0.02, "%"}
	saturationHeadroom  = Threshold{"saturation-headroom", 0.2, "%"}
	rippleBandLow       = Threshold{"ripple-band.min", 0.15, ""}
	rippleBandHigh      = Threshold{"ripple-band.max", 0.6, ""}
	voltageDerating     = Threshold{"voltage-derating", 0.8, "%"}
	currentDerating     = Threshold{"current-derating", 0.8, "%"}
	rhpZeroFraction     = Threshold{"rhp-zero-fraction", 1.0 / 5, ""}
	switchingFraction   = Threshold{"switching-fraction", 1.0 / 5, ""}
	resonanceClearance  = Threshold{"resonance-clearance", 2, ""}
	esrSpread           = Threshold{"esr-spread", 3, ""}
	halfQualityLow      = Threshold{"half-frequency-quality.min", 0.15, ""}
	halfQualityHigh     = Threshold{"half-frequency-quality.max", 2, ""}
	impedanceRatio      = Threshold{"impedance-ratio", 0.5, ""}
	filterQuality       = Threshold{"filter-quality", 2, ""}
	phaseMarginLimit    = Threshold{"phase-margin", 45, "deg"}
	gainMarginLimit     = Threshold{"gain-margin", 8, "dB"}
	modulusMarginLimit  = Threshold{"modulus-margin", 0.5, ""}
	reductionMargin     = Threshold{"gain-reduction-margin", 10, "dB"}
	dcError             = Threshold{"dc-error", 0.01, "%"}
	comparatorRippleDeg = Threshold{"comparator-ripple", 10, "deg"}
	amplifierPhase      = Threshold{"amplifier-phase", 5, "deg"}
	assumedBandwidth    = Threshold{"assumed-gain-bandwidth", 1e6, "Hz"}
	samplingFraction    = Threshold{"sampling-fraction", 1.0 / 10, ""}
	delayPhase          = Threshold{"delay-phase", 30, "deg"}
	optoClearance       = Threshold{"optocoupler-clearance", 3, ""}
)

// threshold is the value in force: the policy's, else the built-in default.
func (c *Case) threshold(t Threshold) float64 {
	if v, set := c.Settings.Thresholds[t.Key]; set {
		return v
	}
	return t.Default
}

// atLeast is the limit of a figure that should be large: the design's target replaces the built-in default, but against a
// threshold that a policy sets the stricter one holds.
func (c *Case) atLeast(t Threshold, target string) float64 {
	q, stated := c.Spec.Quantity(target)
	if !stated {
		return c.threshold(t)
	}
	if v, set := c.Settings.Thresholds[t.Key]; set {
		return math.Max(v, q.Nominal)
	}
	return q.Nominal
}

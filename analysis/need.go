package analysis

// Need is what is asked of the margins: degrees, decibels and a ratio. NaN: that margin is not asked for.
type Need struct{ PhaseMargin, GainMargin, ModulusMargin float64 }

package loop

// Figures are the margins of one loop gain. Frequencies in Hz, angles in degrees, gains in dB. NaN stands for a figure
// that does not exist (no crossover: no phase margin).
type Figures struct {
	Crossovers          []float64 // ascending
	Crossover           float64   // the highest
	PhaseMargin         float64   // smallest angle to −1 over all crossovers, negative when the closed loop is unstable
	GainMargin          float64   // NaN: none; negative when unstable
	GainReductionMargin float64   // NaN: none (exists only for a conditionally stable loop)
	ModulusMargin       float64   // min |1+T|
	ModulusFrequency    float64
	Stable              bool
	UnstablePlantPoles  int     // open-loop right-half-plane poles
	DCGain              float64 // |T(0)|, +Inf with an integrator

	PhaseMarginFrequency float64 // the crossover that PhaseMargin belongs to
	GainMarginFrequency  float64 // the phase crossover that GainMargin belongs to
}

package loop

import (
	"fmt"
	"math"

	"halfplane/analysis/transfer"
)

// Meter measures loop gains and keeps its working storage from one to the next: once warm it allocates nothing for a rational loop
// gain. The zero value is ready. One goroutine at a time.
type Meter struct{ walker walker }

// StopWhen lets a measurement that takes long (a delay of hundreds of periods) end early: ended is asked every fraction of a millisecond, and
// once it is true Measure returns ErrStopped.
func (m *Meter) StopWhen(ended func() bool) { m.walker.stop = ended }

// Measure writes every figure of the loop gain t into out; out's list is reused. filterFrequency (Hz) sets the range in which
// crossovers and margins are looked for, 1e−6 to 10 times it; a sampled loop ends at half its sampling frequency.
// Stability considers all frequencies. Definitions: theory sheet section 8. Errors: a gain, root, delay or frequency that
// is not usable, and ErrTooInvolved.
func Measure(t *transfer.Product, filterFrequency float64, out *Figures) error {
	var m Meter
	return m.Measure(t, filterFrequency, out)
}

// Measure is the package's Measure with the meter's storage.
func (m *Meter) Measure(t *transfer.Product, filterFrequency float64, out *Figures) error {
	k := &m.walker
	k.evals = 0
	if !(filterFrequency > 0) || math.IsInf(filterFrequency, 0) {
		return fmt.Errorf("measuring a loop: filter frequency %v Hz", filterFrequency)
	}
	if err := k.set(t); err != nil {
		return err
	}
	k.crossovers = out.Crossovers[:0]
	k.first, k.last, k.limit = 2*math.Pi*1e-6*filterFrequency, 2*math.Pi*10*filterFrequency, math.Inf(1)
	if k.period > 0 {
		// A hair below half the sampling frequency: there the curve is on the real axis, and the side it comes from counts.
		k.limit = math.Pi / k.period * (1 - 1e-9)
		k.last = math.Min(k.last, k.limit)
		k.first = math.Min(k.first, k.last/2)
	}
	if k.gain == 0 {
		k.silent(out)
		return nil
	}
	if err := k.walk(); err != nil {
		return fmt.Errorf("measuring a loop: %w", err)
	}
	k.figures(out)
	return nil
}

// LogSlope is d ln T/d ln ω at omega (rad/s): the real part is the slope of ln|T|, the imaginary part that of the phase in
// radians. Errors as Measure.
func (m *Meter) LogSlope(t *transfer.Product, omega float64) (complex128, error) {
	if err := m.walker.set(t); err != nil {
		return 0, err
	}
	_, l := m.walker.at(omega, nil)
	return l, nil
}

// figures turns what the walk found into figures.
func (k *walker) figures(out *Figures) {
	const hz, degree = 1 / (2 * math.Pi), 180 / math.Pi
	for i := range k.crossovers {
		k.crossovers[i] *= hz
	}
	nan := math.NaN()
	*out = Figures{
		Crossovers: k.crossovers, Crossover: nan, PhaseMargin: nan, GainMargin: nan, GainReductionMargin: nan,
		ModulusMargin: k.least, ModulusFrequency: k.leastAt * hz, Stable: k.stable(), UnstablePlantPoles: k.unstable,
		DCGain: k.dcGain(), PhaseMarginFrequency: nan, GainMarginFrequency: nan,
	}
	if n := len(k.crossovers); n > 0 {
		out.Crossover = k.crossovers[n-1]
		out.PhaseMargin, out.PhaseMarginFrequency = k.margin*degree, k.marginAt*hz
		if !out.Stable {
			out.PhaseMargin = -out.PhaseMargin
		}
	}
	below, above := -decibels(k.below), decibels(k.above)
	switch {
	case !out.Stable:
		if below <= above && !math.IsInf(below, 0) {
			out.GainMargin, out.GainMarginFrequency = -below, k.belowAt*hz
		}
		if above < below {
			out.GainMargin, out.GainMarginFrequency = -above, k.aboveAt*hz
		}
	default:
		if !math.IsInf(below, 0) {
			out.GainMargin, out.GainMarginFrequency = below, k.belowAt*hz
		}
		if !math.IsInf(above, 0) {
			out.GainReductionMargin = above
		}
	}
}

// silent gives the figures of T = 0.
func (k *walker) silent(out *Figures) {
	nan := math.NaN()
	*out = Figures{Crossovers: k.crossovers, Crossover: nan, PhaseMargin: nan, GainMargin: nan, GainReductionMargin: nan, ModulusMargin: 1,
		ModulusFrequency: k.first / (2 * math.Pi), Stable: k.unstable == 0, UnstablePlantPoles: k.unstable, PhaseMarginFrequency: nan,
		GainMarginFrequency: nan}
}

// decibels turns ln g into 20·log10 g.
func decibels(ln float64) float64 { return 20 / math.Ln10 * ln }

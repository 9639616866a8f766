package analysis

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
	"gonum.org/v1/gonum/stat"

	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// slowBuck crosses one far below its resonance: the loop gain is K/s there, and the crossover is in proportion to the gain.
func slowBuck(axes ...Axis) *Design {
	return &Design{
		Nominal: Point{
			Circuit: plant.Circuit{Topology: plant.Buck, Phases: 1, SwitchingFrequency: 300e3, InputVoltage: 12, OutputVoltage: 5, LoadCurrent: 3,
				Behaviour: plant.Resistive, TurnsPrimary: 1, TurnsSecondary: 1, Inductor: plant.Winding{Inductance: 10e-6, Resistance: 0.01},
				Banks: []plant.Bank{{Capacitance: 100e-6, ESR: 0.01, Count: 1}}, Synchronous: true,
				Modulator: plant.Modulator{Scheme: plant.VoltageMode, RampAmplitude: 1, NominalInput: 12, ControlRatio: 1}},
			Network: network.Parts{Kind: network.Type1, UpperResistor: 10e3, IntegratorCapacitor: 1e-6},
		},
		Axes: axes,
	}
}

// Source: the crossover of an integrator, K/(2π), K ∝ 1/ramp; quantiles of the uniform law.
func TestQuantilesOfACrossoverThatIsInProportionToTheGain(t *testing.T) {
	d := slowBuck(Axis{"modulator.ramp-amplitude", 0.9, 1, 1.1})
	nominal, err := At(d, nil)
	require.NoError(t, err)
	fc := nominal.Loop.Crossover
	y, err := YieldOf(context.Background(), d, Need{PhaseMargin: 45, GainMargin: nan, ModulusMargin: nan}, YieldOptions{Samples: 20000})
	require.NoError(t, err)
	assert.InEpsilon(t, fc/1.09, y.Crossover.P05, 2e-3)
	assert.InEpsilon(t, fc, y.Crossover.P50, 2e-3)
	assert.InEpsilon(t, fc/0.91, y.Crossover.P95, 2e-3)
	assert.Equal(t, 1.0, y.Pass)
	assert.Equal(t, uint64(DefaultSeed), y.Seed)
	assert.InEpsilon(t, fc/0.9, y.Crossover.Worst, 1e-3, "the highest crossover of all units")
}

// With the limit at a known quantile the pass share is known: the unit passes when its phase margin is above it. The phase margin falls as the
// ramp does, so a tenth of the units, those with the ramp in its lowest tenth, miss a limit put there.
func TestThePassShareIsThatOfTheLaw(t *testing.T) {
	d := slowBuck(Axis{"modulator.ramp-amplitude", 0.9, 1, 1.1})
	limit, err := At(d, []Setting{{"modulator.ramp-amplitude", 0.92}})
	require.NoError(t, err)
	y, err := YieldOf(context.Background(), d, Need{PhaseMargin: limit.Loop.PhaseMargin, GainMargin: nan, ModulusMargin: nan}, YieldOptions{Samples: 20000, Seed: 3})
	require.NoError(t, err)
	assert.InDelta(t, 0.9, y.Pass, 0.007)
	assert.True(t, y.Interval[0] < 0.9 && 0.9 < y.Interval[1], "%v", y.Interval)
}

// Source: C. J. Clopper, E. S. Pearson, Biometrika 26 (1934), closed forms: none of n seen, 1 − (α/2)^(1/n) is the upper end; and for 2 of 10 the
// binomial sums themselves must equal the tails.
func TestTheIntervalOfAShareIsExact(t *testing.T) {
	got := clopperPearson(0, 20, 0.95)
	assert.Zero(t, got[0])
	assert.InDelta(t, 1-math.Pow(0.025, 1.0/20), got[1], 1e-9)
	got = clopperPearson(20, 20, 0.95)
	assert.InDelta(t, math.Pow(0.025, 1.0/20), got[0], 1e-9)
	assert.Equal(t, 1.0, got[1])
	got = clopperPearson(2, 10, 0.95)
	tail := func(p float64, from, to int) (sum float64) {
		for k := from; k <= to; k++ {
			ways := math.Gamma(11) / math.Gamma(float64(k+1)) / math.Gamma(float64(11-k))
			sum += ways * math.Pow(p, float64(k)) * math.Pow(1-p, float64(10-k))
		}
		return sum
	}
	assert.InDelta(t, 0.025, tail(got[0], 2, 10), 1e-9)
	assert.InDelta(t, 0.025, tail(got[1], 0, 2), 1e-9)
}

func TestUnitsDoNotDependOnJobs(t *testing.T) {
	d := buoyWithSpreads(9)
	need := Need{PhaseMargin: 55, GainMargin: 8, ModulusMargin: 0.5}
	one, err := YieldOf(context.Background(), d, need, YieldOptions{Samples: 300, Jobs: 1})
	require.NoError(t, err)
	three, err := YieldOf(context.Background(), d, need, YieldOptions{Samples: 300, Jobs: 3})
	require.NoError(t, err)
	assert.Equal(t, one, three)
	other, err := YieldOf(context.Background(), d, need, YieldOptions{Samples: 300, Seed: 2})
	require.NoError(t, err)
	assert.NotEqual(t, one.PhaseMargin.P50, other.PhaseMargin.P50)
	assert.True(t, one.Pass > 0 && one.Pass < 1, "%v", one.Pass)
}

func TestNoUnitIsWorseThanTheExtremeValue(t *testing.T) {
	d := buoyWithSpreads(9)
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	y, err := YieldOf(context.Background(), d, Need{PhaseMargin: r.Worst.PhaseMargin.Value, GainMargin: r.Worst.GainMargin.Value, ModulusMargin: r.Worst.ModulusMargin.Value}, YieldOptions{Samples: 2000})
	require.NoError(t, err)
	assert.Equal(t, 1.0, y.Pass)
	assert.GreaterOrEqual(t, y.PhaseMargin.Worst, r.Worst.PhaseMargin.Value)
	assert.GreaterOrEqual(t, y.GainMargin.Worst, r.Worst.GainMargin.Value)
	worst, err := At(d, y.PhaseMargin.At)
	require.NoError(t, err)
	assert.InDelta(t, y.PhaseMargin.Worst, worst.Loop.PhaseMargin, 1e-9)
	assert.Greater(t, y.RootSumSquare.PhaseMargin.Low, r.Worst.PhaseMargin.Value, "not all tolerances are at their worst at once")
}

// Source: the variance of the uniform law on ± a is a²/3, so for small, independent tolerances the root sum square of the limits is √3 standard
// deviations.
func TestTheRootSumSquareIsRootThreeDeviationsOfSmallTolerances(t *testing.T) {
	d := buoyWithSpreads(9)
	for i := range d.Axes {
		a := &d.Axes[i]
		a.Min, a.Max = a.Nominal-(a.Nominal-a.Min)/20, a.Nominal+(a.Max-a.Nominal)/20
		if i < 2 {
			a.Min, a.Max = a.Nominal, a.Nominal
		}
	}
	y, err := YieldOf(context.Background(), d, Need{nan, nan, nan}, YieldOptions{Samples: 1})
	require.NoError(t, err)
	p, err := newPlan(d, Options{})
	require.NoError(t, err)
	w, err := newWorker(d)
	require.NoError(t, err)
	var values []float64
	for k := range 4000 {
		u := p.build(w, Need{nan, nan, nan}, 3, uint64(k))
		values = append(values, u.worst[phaseMargin])
	}
	assert.InEpsilon(t, math.Sqrt(3)*stat.StdDev(values, nil), y.RootSumSquare.PhaseMargin.HalfWidth, 0.04)
	assert.InDelta(t, y.RootSumSquare.PhaseMargin.Nominal-y.RootSumSquare.PhaseMargin.HalfWidth, y.RootSumSquare.PhaseMargin.Low, 1e-12)
}

func TestNoSamplesAndAnEndedContextAreErrors(t *testing.T) {
	_, err := YieldOf(context.Background(), slowBuck(), Need{}, YieldOptions{})
	assert.ErrorContains(t, err, "0 of them")
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err = YieldOf(ctx, slowBuck(), Need{}, YieldOptions{Samples: 10})
	assert.ErrorIs(t, err, context.Canceled)
}

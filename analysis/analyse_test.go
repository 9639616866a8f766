package analysis_test

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

func TestResultDoesNotDependOnJobs(t *testing.T) {
	for _, c := range golden(t)[:6] {
		for _, depth := range []analysis.Depth{analysis.Quick, analysis.Full} {
			one, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{Depth: depth, Jobs: 1})
			require.NoError(t, err)
			many, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{Depth: depth, Jobs: 7})
			require.NoError(t, err)
			require.Equal(t, len(one.Corners), len(many.Corners), c.Name)
			for i := range one.Corners {
				require.Equal(t, one.Corners[i].At, many.Corners[i].At)
			}
			sameWorst(t, &one.Worst, &many.Worst)
			assert.Equal(t, one.Method, many.Method)
		}
	}
}

func entries(w *analysis.Worsts) []analysis.Worst {
	return []analysis.Worst{w.PhaseMargin, w.GainMargin, w.GainReductionMargin, w.ModulusMargin, w.RHPZero, w.Crossover, w.CrossoverLow,
		w.CrossoverOverRHPZero}
}

func sameWorst(t *testing.T, a, b *analysis.Worsts) {
	t.Helper()
	ea, eb := entries(a), entries(b)
	for i := range ea {
		assert.Equal(t, ea[i].Corner, eb[i].Corner)
		assert.True(t, ea[i].Value == eb[i].Value || math.IsNaN(ea[i].Value) && math.IsNaN(eb[i].Value))
	}
}

func TestCornersComeInTheirOrder(t *testing.T) {
	for _, c := range golden(t) {
		r, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{Depth: analysis.Quick, Jobs: 1})
		require.NoError(t, err)
		require.LessOrEqual(t, r.Operating+1, len(r.Corners))
		assert.Equal(t, 5, r.Operating, c.Name) // all golden designs have both ranges
		seen := map[string]bool{}
		for i := range r.Corners {
			key := ""
			for k, s := range r.Corners[i].At {
				require.Equal(t, c.Design.Axes[k].Path, s.Path)
				nominal := s.Value == c.Design.Axes[k].Nominal
				operating := s.Path == "input-voltage" || s.Path == "load.current"
				if i == 0 || i <= r.Operating && !operating {
					assert.True(t, nominal, "%s corner %d: %s", c.Name, i, s.Path)
				}
				key += s.Path + "=" + string(binary(s.Value)) + " "
			}
			assert.False(t, seen[key], "%s: corner %d comes twice", c.Name, i)
			seen[key] = true
		}
		for _, e := range entries(&r.Worst) {
			if e.Corner >= 0 {
				assert.False(t, math.IsNaN(r.Corners[e.Corner].Ideal.Duty) && r.Corners[e.Corner].Reached, "%s: closed forms at worst corners", c.Name)
			}
		}
	}
}

func binary(v float64) []byte {
	b := math.Float64bits(v)
	return []byte{byte(b), byte(b >> 8), byte(b >> 16), byte(b >> 24), byte(b >> 32), byte(b >> 40), byte(b >> 48), byte(b >> 56)}
}

// Identity: every corner of an analysis is what At says about its assignment alone.
func TestEveryCornerIsWhatAtSays(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for _, c := range few(golden(t)) {
		result, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{Depth: analysis.Full, Jobs: 2})
		require.NoError(t, err)
		for range 12 {
			corner := &result.Corners[r.IntN(len(result.Corners))]
			alone, err := analysis.At(c.Design, corner.At)
			require.NoError(t, err)
			assert.Equal(t, alone.At, corner.At)
			assert.Equal(t, alone.Reached, corner.Reached)
			assert.Equal(t, alone.Plant.Mode, corner.Plant.Mode)
			if alone.Loop == nil {
				assert.Nil(t, corner.Loop)
				continue
			}
			assert.Equal(t, alone.Loop.Crossovers, corner.Loop.Crossovers)
			assert.Equal(t, alone.Loop.Stable, corner.Loop.Stable)
			assert.Equal(t, alone.Loop.ModulusMargin, corner.Loop.ModulusMargin)
			assert.Equal(t, alone.Plant.Control, corner.Plant.Control)
		}
	}
}

func TestFullIsNeverMilderThanQuick(t *testing.T) {
	for _, c := range few(golden(t)) {
		quick, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{Depth: analysis.Quick})
		require.NoError(t, err)
		full, err := analysis.Analyse(context.Background(), c.Design, analysis.Options{Depth: analysis.Full})
		require.NoError(t, err)
		q, f := entries(&quick.Worst), entries(&full.Worst)
		for i := range q {
			if q[i].Corner < 0 {
				continue
			}
			if i == 5 || i == 7 { // crossover and its ratio: the highest is worst
				assert.GreaterOrEqual(t, f[i].Value, q[i].Value, c.Name)
			} else {
				assert.LessOrEqual(t, f[i].Value, q[i].Value, c.Name)
			}
		}
	}
}

func TestCancelledAnalysisEnds(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err := analysis.Analyse(ctx, golden(t)[0].Design, analysis.Options{})
	assert.ErrorIs(t, err, context.Canceled)
}

// Identity: theory sheet section 7: with an ideal amplifier the lower resistor hangs on a virtual ground.
func TestLowerResistorMovesNoMarginOfAnIdealAmplifier(t *testing.T) {
	d := pumpRail()
	with, err := analysis.At(d, []analysis.Setting{{Path: "compensator.lower-resistor", Value: 2e3}})
	require.NoError(t, err)
	without, err := analysis.At(d, nil)
	require.NoError(t, err)
	assert.Equal(t, without.Loop.PhaseMargin, with.Loop.PhaseMargin)
	assert.Equal(t, []analysis.Setting{{Path: "compensator.lower-resistor", Value: 2e3}}, with.At)
}

// Identity: a modulator delay costs 360°·f·T of phase at crossover and nothing else.
func TestModulatorDelayCostsItsPhase(t *testing.T) {
	d := pumpRail()
	before, err := analysis.At(d, nil)
	require.NoError(t, err)
	after, err := analysis.At(d, []analysis.Setting{{Path: "modulator.delay", Value: 100e-9}})
	require.NoError(t, err)
	assert.InEpsilon(t, before.Loop.Crossover, after.Loop.Crossover, 1e-9)
	assert.InDelta(t, before.Loop.PhaseMargin-360*before.Loop.Crossover*100e-9, after.Loop.PhaseMargin, 1e-6)
}

// Identity: theory sheet section 6: the ramp follows the input, so the loop gain does not; the ramp at nominal input stays the design's.
func TestFeedForwardKeepsTheCrossoverWhenTheInputMoves(t *testing.T) {
	d := pumpRail()
	d.Nominal.Circuit.Modulator.FeedForward = true
	low, err := analysis.At(d, []analysis.Setting{{Path: "input-voltage", Value: 4}})
	require.NoError(t, err)
	high, err := analysis.At(d, []analysis.Setting{{Path: "input-voltage", Value: 6}})
	require.NoError(t, err)
	assert.InEpsilon(t, low.Loop.Crossover, high.Loop.Crossover, 2e-3)
	assert.InEpsilon(t, 93.1e3, low.Loop.Crossover, 0.01)
}

func TestUnknownPathIsNamed(t *testing.T) {
	_, err := analysis.At(pumpRail(), []analysis.Setting{{Path: "inductor.inductence", Value: 1}})
	assert.ErrorContains(t, err, `"inductor.inductence"`)
	d := pumpRail()
	d.Axes = []analysis.Axis{{Path: "no.such", Min: 0, Nominal: 1, Max: 2}}
	_, err = analysis.Analyse(context.Background(), d, analysis.Options{})
	assert.ErrorContains(t, err, "no.such")
	d.Axes = []analysis.Axis{{Path: "input-voltage", Min: 6, Nominal: 5, Max: 7}}
	_, err = analysis.Analyse(context.Background(), d, analysis.Options{})
	assert.ErrorContains(t, err, "input-voltage")
}

func TestUnreachableCornerIsAResultNotAnError(t *testing.T) {
	d := pumpRail()
	d.Axes = []analysis.Axis{{Path: "input-voltage", Min: 1, Nominal: 5, Max: 6}, {Path: "inductor.inductance", Min: 0.5e-6, Nominal: 0.56e-6, Max: 0.6e-6}}
	r, err := analysis.Analyse(context.Background(), d, analysis.Options{})
	require.NoError(t, err)
	require.Equal(t, 2, r.Operating)
	assert.False(t, r.Corners[1].Reached)
	assert.Nil(t, r.Corners[1].Loop)
	assert.True(t, r.Corners[2].Reached)
	assert.GreaterOrEqual(t, r.Worst.PhaseMargin.Corner, 0)
}

func TestOperatingRangesWithoutWidthGiveOneValue(t *testing.T) {
	d := pumpRail()
	d.Axes = []analysis.Axis{{Path: "load.current", Min: 1, Nominal: 15, Max: 15}}
	r, err := analysis.Analyse(context.Background(), d, analysis.Options{Depth: analysis.Quick})
	require.NoError(t, err)
	assert.Equal(t, 1, r.Operating) // full load is nominal
	require.Len(t, r.Corners, 2)
	assert.Equal(t, 1.0, r.Corners[1].At[0].Value)
}

// Source: theory sheet section 13, trap 7: a constant-power load can make the plant itself unstable.
func TestConstantPowerLoadShowsItsUnstablePlant(t *testing.T) {
	d := pumpRail()
	d.Nominal.Circuit.Behaviour = plant.ConstantPower
	d.Nominal.Circuit.Inductor.Resistance, d.Nominal.Circuit.Banks[0].ESR = 1e-4, 1e-5
	c, err := analysis.At(d, nil)
	require.NoError(t, err)
	assert.Equal(t, 2, c.Loop.UnstablePlantPoles)
	weak, err := analysis.At(d, []analysis.Setting{{Path: "modulator.ramp-amplitude", Value: 1e6}})
	require.NoError(t, err)
	assert.False(t, weak.Loop.Stable)
}

// Identity: a seeded grid of hostile numbers gives errors or figures, never a panic.
func TestHostileNumbersNeverPanic(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 9))
	values := []float64{0, -1, 1e-300, 1e300, math.Inf(1), math.NaN(), 1e-12, 1e12}
	for _, c := range golden(t) {
		paths := []string{"switching-frequency", "output-voltage", "input-voltage", "load.current", "output-capacitor.count"}
		for _, a := range c.Design.Axes {
			paths = append(paths, a.Path)
		}
		for range 150 {
			s := []analysis.Setting{{Path: paths[r.IntN(len(paths))], Value: values[r.IntN(len(values))]}}
			corner, err := analysis.At(c.Design, s)
			if err == nil && corner.Loop != nil {
				assert.False(t, math.IsNaN(corner.Loop.ModulusMargin), "%s %v", c.Name, s)
			}
		}
	}
}

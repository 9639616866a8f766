package analysis

import (
	"context"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// buoyWithSpreads is buoyBoost with a range of input and load and that many toleranced parts, the common ones first.
func buoyWithSpreads(parts int) *Design {
	d := buoyBoost()
	p := &d.Nominal
	around := func(path string, part float64) Axis {
		v := *Field(p, path)
		return Axis{path, v * (1 - part), v, v * (1 + part)}
	}
	d.Axes = []Axis{{"input-voltage", 9, 12, 16}, {"load.current", 0.2, 1, 1.5}}
	for i, path := range []string{"inductor.inductance", "output-capacitors.0.capacitance", "output-capacitors.0.esr", "compensator.upper-resistor",
		"compensator.feedback-resistor", "compensator.integrator-capacitor", "compensator.rolloff-capacitor", "compensator.lead-resistor",
		"compensator.lead-capacitor", "modulator.ramp-amplitude", "compensator.amplifier.gain-bandwidth", "switch.on-resistance",
		"inductor.resistance", "rectifier.resistance", "compensator.lower-resistor"} {
		if i < parts {
			d.Axes = append(d.Axes, around(path, 0.05+0.02*float64(i%4)))
		}
	}
	return d
}

// everyExtreme is the lowest value of a figure over all extremes of all axes, one after the other.
func everyExtreme(t *testing.T, d *Design, f figure) float64 {
	p, err := newPlan(d, Options{})
	require.NoError(t, err)
	w, err := newWorker(d)
	require.NoError(t, err)
	worst := math.Inf(1)
	axes := append([]int{p.input, p.load}, p.tolerant...)
	p.box.Vertices(slices.Clone(p.nominal), axes, func(x []float64) bool {
		var r reading
		w.set(x)
		w.read(&r)
		if r[f] < worst {
			worst = r[f]
		}
		return true
	})
	return worst
}

func TestFullDepthIsAtLeastAsBadAsEveryExtreme(t *testing.T) {
	d := buoyWithSpreads(8)
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	assert.True(t, r.Complete)
	assert.LessOrEqual(t, r.Worst.PhaseMargin.Value, everyExtreme(t, d, phaseMargin)+1e-9)
	assert.LessOrEqual(t, r.Worst.GainMargin.Value, everyExtreme(t, d, gainMargin)+1e-9)
	assert.LessOrEqual(t, r.Worst.ModulusMargin.Value, everyExtreme(t, d, modulusMargin)+1e-9)
	assert.GreaterOrEqual(t, r.Worst.Crossover.Value, -everyExtreme(t, d, highCrossover)-1e-6)
}

func TestBeyondTheLimitTheRestGoesBySensitivityAndIsSaid(t *testing.T) {
	d := buoyWithSpreads(15)
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	assert.False(t, r.Complete)
	assert.Contains(t, r.Method, "4096 extremes at each operating corner, 3 more tolerances by sensitivity")
	for i := range d.Axes { // two operating corners less make every extreme affordable
		if d.Axes[i].Path == "input-voltage" {
			d.Axes[i] = Axis{"input-voltage", 9, 9, 9}
		}
	}
	r, err = Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	assert.LessOrEqual(t, r.Worst.PhaseMargin.Value, everyExtreme(t, d, phaseMargin)+1e-9)
	assert.LessOrEqual(t, r.Worst.GainMargin.Value, everyExtreme(t, d, gainMargin)+1e-9)
}

func TestQuickDepthSaysThatItIsNotComplete(t *testing.T) {
	r, err := Analyse(context.Background(), buoyWithSpreads(8), Options{Depth: Quick})
	require.NoError(t, err)
	assert.False(t, r.Complete)
	assert.Contains(t, r.Method, "5 tolerances by sensitivity")
	r, err = Analyse(context.Background(), buoyWithSpreads(3), Options{Depth: Quick})
	require.NoError(t, err)
	assert.True(t, r.Complete, "only what stores energy has a spread: all extremes are visited")
}

func TestAPartThatMovesNothingStaysNominal(t *testing.T) {
	d := buoyWithSpreads(9)
	d.Nominal.Network.GainBandwidth, d.Nominal.Network.OpenLoopGain = 0, 0
	d.Axes = append(d.Axes, Axis{"compensator.lower-resistor", 5400, 5490, 5600})
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	for _, s := range r.Corners[r.Worst.PhaseMargin.Corner].At {
		if s.Path == "compensator.lower-resistor" {
			assert.Equal(t, 5490.0, s.Value, "an ideal amplifier's virtual ground hides it")
		}
	}
}

func TestOnlyAskingForAllPointsKeepsThem(t *testing.T) {
	d := buoyWithSpreads(5)
	few, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	all, err := Analyse(context.Background(), d, Options{KeepAll: true})
	require.NoError(t, err)
	assert.Less(t, len(few.Corners), few.Analysed/5)
	assert.Len(t, all.Corners, all.Analysed)
	assert.GreaterOrEqual(t, all.Analysed, 5*32)
	assert.InDelta(t, few.Worst.PhaseMargin.Value, all.Worst.PhaseMargin.Value, 1e-9)
}

// After the end of the context a search evaluates nothing any more: what is left is the point under way on each worker.
func TestAnEndedContextStopsTheSearchAtOnce(t *testing.T) {
	d := buoyWithSpreads(12)
	p, err := newPlan(d, Options{})
	require.NoError(t, err)
	w, err := newWorker(d)
	require.NoError(t, err)
	ctx, cancel := context.WithCancel(context.Background())
	s := newSearch(ctx, p, w)
	p.box.Vertices(slices.Clone(p.nominal), p.tolerant, func(x []float64) bool {
		if s.tally.points == 100 {
			cancel()
		}
		s.probe(x)
		return true // even a walk that goes on
	})
	assert.Equal(t, 100, s.tally.points)
	assert.ErrorIs(t, s.ended, context.Canceled)
	before := s.tally.points
	x := slices.Clone(p.nominal)
	s.downhill(x, 45, p.tolerant, p.tolerant, s.valueOf(phaseMargin))
	s.scatter(p.tolerant, 1000, 1)
	s.kink(x, p.load)
	assert.Equal(t, before, s.tally.points)
}

func TestMethodNamesWhatWasDone(t *testing.T) {
	r, err := Analyse(context.Background(), buoyWithSpreads(4), Options{})
	require.NoError(t, err)
	assert.True(t, strings.HasPrefix(r.Method, "extreme-value, ") && strings.HasSuffix(r.Method, " corners, refined"), r.Method)
}

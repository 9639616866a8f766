package analysis

import (
	"context"
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/loop"
)

func effectOf(t *testing.T, list []Effect, path string) Effect {
	t.Helper()
	for _, e := range list {
		if e.Path == path {
			return e
		}
	}
	require.Fail(t, "no effect", path)
	return Effect{}
}

// Source: first-order perturbation. With l = d ln T/d ln ω at the crossover, one per cent less ramp is one per cent more gain: the crossover moves by
// −1/Re l per cent, and the phase margin by Im l times that.
func TestTheRampsEffectIsThatOfTheGain(t *testing.T) {
	d := buoyWithSpreads(10)
	at := []Setting{{"input-voltage", 9}, {"load.current", 1.5}}
	c, err := At(d, at)
	require.NoError(t, err)
	w, err := newWorker(d)
	require.NoError(t, err)
	x := nominalOf(d)
	x[0], x[1] = 9, 1.5
	w.set(x)
	require.True(t, w.hasLoop())
	l, err := w.meter.LogSlope(&w.gain, 2*math.Pi*c.Loop.Crossover)
	require.NoError(t, err)
	crossover := 1 / real(l) // of one per cent more ramp, in per cent
	margin := imag(l) * crossover / 100 * 180 / math.Pi

	effects, err := Effects(context.Background(), d, at, CrossoverOf, false)
	require.NoError(t, err)
	assert.InEpsilon(t, crossover, effectOf(t, effects, "modulator.ramp-amplitude").PerPercent/c.Loop.Crossover*100, 1e-5)
	effects, err = Effects(context.Background(), d, at, PhaseMarginOf, false)
	require.NoError(t, err)
	assert.InEpsilon(t, margin, effectOf(t, effects, "modulator.ramp-amplitude").PerPercent, 1e-5)
}

func TestEffectsAreRankedAndOnlyOfParts(t *testing.T) {
	d := buoyWithSpreads(8)
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	s, err := SensitivitiesOf(context.Background(), d, r)
	require.NoError(t, err)
	for _, list := range [][]Effect{s.PhaseMargin, s.GainMargin, s.Crossover} {
		require.NotEmpty(t, list)
		for i, e := range list {
			assert.NotContains(t, []string{"input-voltage", "load.current", "output-voltage", "switching-frequency"}, e.Path)
			if i > 0 {
				assert.LessOrEqual(t, math.Abs(e.PerPercent), math.Abs(list[i-1].PerPercent))
			}
		}
	}
	wide := effectOf(t, s.PhaseMargin, "compensator.feedback-resistor")
	at := r.Corners[r.Worst.PhaseMargin.Corner].At
	value := func(v float64) float64 {
		settings := append([]Setting{}, at...)
		c, err := At(d, append(settings, Setting{"compensator.feedback-resistor", v}))
		require.NoError(t, err)
		return c.Loop.PhaseMargin
	}
	for _, a := range d.Axes {
		if a.Path == wide.Path {
			assert.InDelta(t, value(a.Max)-value(a.Min), wide.OverSpread, 1e-9)
		}
	}
	assert.True(t, math.IsNaN(effectOf(t, s.PhaseMargin, "modulator.ramp-amplitude").OverSpread), "the eight parts leave the ramp exact")
}

// At the very edge of the modes the difference across it says nothing about either side.
func TestBesideAChangeOfModeTheDifferenceIsTakenOnOneSide(t *testing.T) {
	d := slowBuck()
	c := &d.Nominal.Circuit
	c.Synchronous, c.RectifierDrop = false, 0.4
	p, err := newPlan(&Design{Nominal: d.Nominal, Axes: []Axis{{"load.current", 0.05, 0.5, 3}}}, Options{})
	require.NoError(t, err)
	w, err := newWorker(p.design)
	require.NoError(t, err)
	s := newSearch(context.Background(), p, w)
	sides := s.sides([]float64{0.5}, 0)
	require.Len(t, sides, 2)
	phase := func(l *loop.Figures) float64 { return l.PhaseMargin }
	for _, load := range sides {
		near, err := Effects(context.Background(), p.design, []Setting{{"load.current", load}}, phase, false)
		require.NoError(t, err)
		far, err := Effects(context.Background(), p.design, []Setting{{"load.current", load * (1 + 2e-3*math.Copysign(1, load-(sides[0]+sides[1])/2))}}, phase, false)
		require.NoError(t, err)
		a, b := effectOf(t, near, "inductor.inductance").PerPercent, effectOf(t, far, "inductor.inductance").PerPercent
		assert.InDelta(t, b, a, 0.1*math.Abs(b)+1e-6, "at %v A", load)
	}
}

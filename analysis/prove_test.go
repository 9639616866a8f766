package analysis

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"strings"
	"sync/atomic"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/network"
	"halfplane/analysis/plant"
)

// covered are invented designs of every kind that a proof covers.
func covered() map[string]*Design {
	list := map[string]*Design{}
	add := func(name string, change func(d *Design)) {
		d := buoyWithSpreads(11)
		change(d)
		for i := range d.Axes { // ranges follow the values
			a := &d.Axes[i]
			if v := *Field(&d.Nominal, a.Path); v != a.Nominal {
				*a = Axis{a.Path, v * a.Min / a.Nominal, v, v * a.Max / a.Nominal}
			}
			if strings.HasPrefix(a.Path, "compensator.") { // chips and film, not iron powder
				a.Min, a.Max = a.Nominal-(a.Nominal-a.Min)/4, a.Nominal+(a.Max-a.Nominal)/4
			}
		}
		list[name] = d
	}
	without := func(d *Design, paths ...string) {
		d.Axes = slices.DeleteFunc(d.Axes, func(a Axis) bool { return slices.Contains(paths, a.Path) })
	}
	add("boost", func(*Design) {})
	add("boost with an ideal amplifier", func(d *Design) {
		d.Nominal.Network.GainBandwidth, d.Nominal.Network.OpenLoopGain = 0, 0
		without(d, "compensator.amplifier.gain-bandwidth")
	})
	add("boost with delay and feed-forward", func(d *Design) {
		d.Nominal.Circuit.Modulator.FeedForward, d.Nominal.Circuit.Modulator.Delay = true, 3e-7
	})
	add("two boosts, constant current, diode", func(d *Design) {
		c := &d.Nominal.Circuit
		c.Phases, c.Behaviour, c.Synchronous, c.RectifierDrop = 2, plant.ConstantCurrent, false, 0.4
		c.Inductor.Inductance, c.LoadCurrent = 47e-6, 4
	})
	add("buck with a type-2 network", func(d *Design) {
		c, n := &d.Nominal.Circuit, &d.Nominal.Network
		c.Topology, c.OutputVoltage, c.LoadCurrent = plant.Buck, 5, 4
		n.Kind = network.Type2
		without(d, "compensator.lead-resistor", "compensator.lead-capacitor")
	})
	add("buck-boost, constant power, two banks", func(d *Design) {
		c := &d.Nominal.Circuit
		c.Topology, c.Behaviour = plant.BuckBoost, plant.ConstantPower
		c.Banks = append(c.Banks, plant.Bank{Capacitance: 10e-6, ESR: 0.003, Count: 3})
		d.Axes = append(d.Axes, Axis{"output-capacitors.1.capacitance", 7e-6, 10e-6, 12e-6})
	})
	add("flyback with load capacitance", func(d *Design) {
		c := &d.Nominal.Circuit
		c.Topology, c.TurnsPrimary, c.TurnsSecondary, c.InductorOnPrimary = plant.Flyback, 1, 2.2, true
		c.LoadCapacitance, c.LoadESR = 47e-6, 0.02
		d.Axes = append(d.Axes, Axis{"load.capacitance", 20e-6, 47e-6, 100e-6})
	})
	add("half-bridge", func(d *Design) {
		c := &d.Nominal.Circuit
		c.Topology, c.TurnsPrimary, c.TurnsSecondary, c.OutputVoltage, c.RectifierDrop = plant.HalfBridge, 2, 3, 5, 0.3
	})
	add("flyback with turns, frequency and voltage that spread, diode", func(d *Design) {
		c := &d.Nominal.Circuit
		c.Topology, c.TurnsPrimary, c.TurnsSecondary, c.InductorOnPrimary = plant.Flyback, 10, 21, true
		c.Synchronous, c.RectifierDrop, c.LoadCurrent = false, 0.5, 3
		d.Axes = append(d.Axes, Axis{"turns.secondary", 20.8, 21, 21.2}, Axis{"turns.primary", 9.9, 10, 10.1},
			Axis{"switching-frequency", c.SwitchingFrequency * 0.9, c.SwitchingFrequency, c.SwitchingFrequency * 1.1},
			Axis{"output-voltage", c.OutputVoltage * 0.97, c.OutputVoltage, c.OutputVoltage * 1.05})
		without(d, "compensator.rolloff-capacitor", "compensator.lead-resistor", "compensator.amplifier.gain-bandwidth")
	})
	add("isolated boost", func(d *Design) {
		c := &d.Nominal.Circuit
		c.Topology, c.TurnsPrimary, c.TurnsSecondary, c.OutputVoltage = plant.IsolatedBoost, 1, 3, 60
		c.LoadCurrent = 0.4
	})
	add("boost with a transconductance amplifier", func(d *Design) {
		n := &d.Nominal.Network
		n.Kind, n.Transconductance, n.OutputResistance = network.Transconductance, 1.8e-4, 2e6
		n.GainBandwidth, n.OpenLoopGain = 0, 0
		without(d, "compensator.amplifier.gain-bandwidth")
		d.Axes = append(d.Axes, Axis{"compensator.transconductance", 1.6e-4, 1.8e-4, 2e-4}, Axis{"compensator.lower-resistor", 5400, 5490, 5600})
	})
	return list
}

// wideAxes lists the axes of a design that have a range.
func wideAxes(d *Design) (axes []int) {
	for i, a := range d.Axes {
		if a.Min < a.Max {
			axes = append(axes, i)
		}
	}
	return axes
}

// Source: package plant and network themselves, which are checked against independent figures; here the enclosure must hold theirs.
func TestTheEnclosureHoldsTheLoopGainAtEveryPoint(t *testing.T) {
	for name, d := range covered() {
		t.Run(name, func(t *testing.T) {
			r := rand.New(rand.NewPCG(7, uint64(len(name))))
			w, err := newWorker(d)
			require.NoError(t, err)
			axes := wideAxes(d)
			e, why := enclose(d)
			require.Empty(t, why)
			measured := 0
			for range 60 {
				part := math.Pow(10, -3*r.Float64())
				var c cell
				for _, axis := range axes {
					a := d.Axes[axis]
					low := a.Min + (a.Max-a.Min)*(1-part)*r.Float64()
					c.low, c.high = append(c.low, low), append(c.high, low+(a.Max-a.Min)*part)
				}
				l, why := e.loopOver(&c)
				if why != "" {
					continue
				}
				low := math.Log(2*math.Pi*e.stage.FilterFrequency) - 9*r.Float64()
				high := low + 0.2*r.Float64()
				var g gainForms
				require.True(t, e.between(&l, low, high, &g))
				for range 40 {
					x := nominalOf(d)
					eps := make([]float64, len(axes)+1)
					for i, axis := range axes {
						eps[i] = 2*r.Float64() - 1
						x[axis] = c.low[i] + (c.high[i]-c.low[i])*(1+eps[i])/2
					}
					eps[len(axes)] = 2*r.Float64() - 1
					w.set(x)
					require.True(t, w.hasLoop())
					require.Equal(t, plant.Continuous, w.solution.Mode)
					gain := w.gain.At(math.Exp(low + (high-low)*(1+eps[len(axes)])/2))
					least, most := e.size(&g)
					v := math.Log(cmplx.Abs(gain))
					require.True(t, least <= v+1e-9 && v-1e-9 <= most, "%v in [%v, %v]", v, least, most)
					if !g.whole {
						continue
					}
					measured++
					within := func(f *[20]float64, centre, rest, value float64) {
						for i, v := range eps {
							centre += f[i] * v
						}
						require.InDelta(t, centre, value, rest+1e-9)
					}
					within(&g.g.Coef, g.g.Centre, g.g.Rest, v)
					theta := cmplx.Phase(-gain)
					theta += 2 * math.Pi * math.Round((g.theta.Centre-theta)/(2*math.Pi))
					within(&g.theta.Coef, g.theta.Centre, g.theta.Rest, theta)
				}
			}
			assert.Greater(t, measured, 500)
		})
	}
}

func nominalOf(d *Design) []float64 {
	var x []float64
	for _, a := range d.Axes {
		x = append(x, a.Nominal)
	}
	return x
}

func TestAPointCellIsTheOrdinaryAnalysis(t *testing.T) {
	for name, d := range covered() {
		axes := wideAxes(d)
		e, why := enclose(d)
		require.Empty(t, why, name)
		var c cell
		for _, axis := range axes {
			c.low, c.high = append(c.low, d.Axes[axis].Nominal), append(c.high, d.Axes[axis].Nominal)
		}
		l, why := e.loopOver(&c)
		require.Empty(t, why, name)
		want, err := LoopGain(&d.Nominal)
		require.NoError(t, err)
		for _, w := range []float64{10, 1e3, 1e4, 1e5, 1e6} {
			var g gainForms
			require.True(t, e.between(&l, math.Log(w), math.Log(w), &g), name)
			got := cmplx.Rect(math.Exp(g.g.Centre), g.theta.Centre-math.Pi)
			assert.InDelta(t, 0, cmplx.Abs(got/want.At(w)-1), 1e-10, "%s at %v rad/s", name, w)
			assert.Less(t, g.g.Rest+g.theta.Rest, 1e-9, name)
		}
	}
}

// A verdict is checked by points that the proof did not choose: none may contradict it.
func TestNoPointContradictsAVerdict(t *testing.T) {
	points := 100_000
	if testing.Short() {
		points = 3000
	}
	for name, d := range covered() {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			r, err := Analyse(context.Background(), d, Options{})
			require.NoError(t, err)
			if r.Worst.PhaseMargin.Value <= 0 {
				t.Fatal("this design is meant to be stable everywhere")
			}
			need := Need{PhaseMargin: 0.9 * r.Worst.PhaseMargin.Value, GainMargin: math.Min(10, 0.9*r.Worst.GainMargin.Value), ModulusMargin: 0.9 * r.Worst.ModulusMargin.Value}
			p, err := Prove(context.Background(), d, need, ProveOptions{Found: r, Jobs: 1})
			require.NoError(t, err)
			t.Log(p.PhaseMargin.Verdict, p.PhaseMargin.Boxes, p.PhaseMargin.Why, p.GainMargin, p.ModulusMargin)
			require.Equal(t, Proved, p.PhaseMargin.Verdict, "%s", p.PhaseMargin.Why)
			assert.Equal(t, Proved, p.ModulusMargin.Verdict, "%s", p.ModulusMargin.Why)
			worst := randomWorst(t, d, points)
			assert.GreaterOrEqual(t, worst[phaseMargin], need.PhaseMargin)
			assert.GreaterOrEqual(t, worst[modulusMargin], need.ModulusMargin)
			if p.GainMargin != nil && p.GainMargin.Verdict == Proved && !math.IsNaN(worst[gainMargin]) {
				assert.GreaterOrEqual(t, worst[gainMargin], need.GainMargin)
			}
		})
	}
}

// randomWorst evaluates points spread evenly over the box.
func randomWorst(t *testing.T, d *Design, points int) reading {
	r := rand.New(rand.NewPCG(99, 1))
	w, err := newWorker(d)
	require.NoError(t, err)
	all := newTally()
	x := nominalOf(d)
	for range points {
		for i, a := range d.Axes {
			x[i] = a.Min + (a.Max-a.Min)*r.Float64()
		}
		var v reading
		w.set(x)
		w.read(&v)
		all.enter(x, &v)
	}
	return all.worst
}

// The limit is put so near the worst that the points which break it fill less than a hundredth of the box; the search is told nothing
// (Found holds nominal alone), so the proof has to find them itself.
func TestAViolationInASmallCornerOfTheBoxIsFound(t *testing.T) {
	for _, name := range []string{"boost", "flyback with load capacitance", "buck with a type-2 network"} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			d := covered()[name]
			r, err := Analyse(context.Background(), d, Options{})
			require.NoError(t, err)
			limit := r.Worst.PhaseMargin.Value + 0.05
			w, err := newWorker(d)
			require.NoError(t, err)
			rng := rand.New(rand.NewPCG(5, 5))
			broken := 0
			x := nominalOf(d)
			for range 2000 {
				for i, a := range d.Axes {
					x[i] = a.Min + (a.Max-a.Min)*rng.Float64()
				}
				var v reading
				w.set(x)
				if w.read(&v); v[phaseMargin] < limit {
					broken++
				}
			}
			require.Less(t, broken, 20, "less than one in a hundred points")
			blind := &Result{Corners: r.Corners[:1]}
			p, err := Prove(context.Background(), d, Need{PhaseMargin: limit, GainMargin: nan, ModulusMargin: nan}, ProveOptions{Found: blind})
			require.NoError(t, err)
			require.Equal(t, Refuted, p.PhaseMargin.Verdict, p.PhaseMargin.Why)
			c, err := At(d, p.PhaseMargin.At)
			require.NoError(t, err)
			assert.Less(t, c.Loop.PhaseMargin, limit)
			assert.InDelta(t, c.Loop.PhaseMargin, p.PhaseMargin.Value, 1e-9)
		})
	}
}

func TestTheVerdictDoesNotDependOnJobs(t *testing.T) {
	d := covered()["boost"]
	need := Need{PhaseMargin: 30, GainMargin: 6, ModulusMargin: 0.4}
	one, err := Prove(context.Background(), d, need, ProveOptions{Jobs: 1})
	require.NoError(t, err)
	three, err := Prove(context.Background(), d, need, ProveOptions{Jobs: 3})
	require.NoError(t, err)
	assert.Equal(t, fmt.Sprint(*one.PhaseMargin, *one.GainMargin, *one.ModulusMargin), fmt.Sprint(*three.PhaseMargin, *three.GainMargin, *three.ModulusMargin))
}

func TestASmallBudgetLeavesTheVerdictOpenAndSaysWhatIsLeft(t *testing.T) {
	d := covered()["boost"]
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	p, err := Prove(context.Background(), d, Need{PhaseMargin: r.Worst.PhaseMargin.Value - 0.01, GainMargin: nan, ModulusMargin: nan}, ProveOptions{Found: r, Boxes: 2000})
	require.NoError(t, err)
	c := p.PhaseMargin
	assert.Equal(t, Undecided, c.Verdict)
	assert.True(t, c.Left > 0 && c.Left <= 1, "%v", c.Left)
	assert.Contains(t, c.Why, "boxes")
	assert.Len(t, c.At, len(d.Axes))
	assert.Nil(t, p.GainMargin)
}

func TestWhatIsNotCoveredIsUndecidedWithAReason(t *testing.T) {
	for name, c := range map[string]struct {
		change func(d *Design)
		why    string
	}{
		"current mode": {func(d *Design) {
			d.Nominal.Circuit.Modulator = plant.Modulator{Scheme: plant.PeakCurrentMode, CurrentSenseGain: 0.05, SlopeCompensation: 3e4, ControlRatio: 1}
			d.Axes = d.Axes[:5]
		}, "voltage mode"},
		"input filter": {func(d *Design) {
			d.Nominal.Circuit.Filter = plant.Filter{Inductance: 1e-6, Resistance: 0.02, Capacitance: 1e-4, ESR: 0.05}
		}, "input filter"},
		"light load through a diode": {func(d *Design) {
			d.Nominal.Circuit.Synchronous, d.Nominal.Circuit.RectifierDrop = false, 0.4
		}, "continuous conduction"},
	} {
		d := buoyWithSpreads(9)
		c.change(d)
		p, err := Prove(context.Background(), d, Need{PhaseMargin: 1, GainMargin: nan, ModulusMargin: nan}, ProveOptions{})
		require.NoError(t, err, name)
		require.Equal(t, Undecided, p.PhaseMargin.Verdict, name)
		assert.Contains(t, p.PhaseMargin.Why, c.why, name)
		assert.Equal(t, 1.0, p.PhaseMargin.Left, name)
	}
}

func TestAMarginThatIsMissedIsRefutedWhateverTheDesign(t *testing.T) {
	d := buoyWithSpreads(4)
	d.Nominal.Circuit.Modulator = plant.Modulator{Scheme: plant.PeakCurrentMode, CurrentSenseGain: 0.05, SlopeCompensation: 3e4, ControlRatio: 1}
	p, err := Prove(context.Background(), d, Need{PhaseMargin: 179, GainMargin: nan, ModulusMargin: nan}, ProveOptions{})
	require.NoError(t, err)
	assert.Equal(t, Refuted, p.PhaseMargin.Verdict)
	assert.Less(t, p.PhaseMargin.Value, 179.0)
}

func TestAnEndedContextStopsAProof(t *testing.T) {
	d := covered()["boost"]
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	_, err = Prove(ctx, d, Need{PhaseMargin: 40, GainMargin: nan, ModulusMargin: nan}, ProveOptions{Found: r})
	assert.ErrorIs(t, err, context.Canceled)
}

// countdown is a context that ends after it was asked so many times, and counts how often it is asked afterwards.
type countdown struct {
	context.Context
	left, after atomic.Int64
}

func (c *countdown) Err() error {
	if c.left.Add(-1) >= 0 {
		return nil
	}
	c.after.Add(1)
	return context.Canceled
}

// The limit is a hair below the worst, so that the proof goes on until it is stopped. Every cell asks before it is worked on: once the context has
// ended the cells that wait in the wave are asked for and dropped, and no further wave begins.
func TestAProofUnderWayBeginsNothingAfterItsContextEnds(t *testing.T) {
	d := covered()["boost"]
	r, err := Analyse(context.Background(), d, Options{})
	require.NoError(t, err)
	ctx := &countdown{Context: context.Background()}
	ctx.left.Store(3000)
	_, err = Prove(ctx, d, Need{PhaseMargin: r.Worst.PhaseMargin.Value - 1e-6, GainMargin: nan, ModulusMargin: nan}, ProveOptions{Found: r})
	require.ErrorIs(t, err, context.Canceled)
	assert.Positive(t, ctx.after.Load())
	assert.LessOrEqual(t, ctx.after.Load(), int64(2*wave))
}

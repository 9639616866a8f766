package analysis

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

// YieldOptions of a Monte Carlo analysis: how many units are built, from which seed (0: DefaultSeed), on how many workers.
type YieldOptions struct {
	Samples int
	Seed    uint64
	Jobs    int
}

// DefaultSeed makes results repeatable where no seed is asked for.
const DefaultSeed = 1

// Yield is what a number of built units, drawn at random, come to.
type Yield struct {
	Samples  int
	Seed     uint64
	Pass     float64    // share of units that are stable and have every margin asked for at every operating corner
	Interval [2]float64 // 95 % confidence interval of that share

	PhaseMargin, GainMargin, ModulusMargin Distribution // of each unit's worst operating corner
	Crossover                              Distribution // of each unit's highest
	RootSumSquare                          RootSumSquares
}

// Distribution holds quantiles over the units in which the figure exists, and the worst unit. NaN: it exists in none.
type Distribution struct {
	P01, P05, P50, P95, P99 float64
	Worst                   float64
	At                      []Setting // the worst unit at its worst operating corner
	Without                 int       // units in which the figure exists at no corner
}

// RootSumSquares are the margins at the operating corner that is worst with nominal parts, less the root of the sum of the squares of what each
// tolerance costs on its own (worst-case analysis by root sum square, common practice).
type RootSumSquares struct{ PhaseMargin, GainMargin, ModulusMargin RootSumSquare }

// RootSumSquare is Nominal − HalfWidth = Low; NaN: the figure does not exist.
type RootSumSquare struct{ Nominal, HalfWidth, Low float64 }

// YieldOf builds units at random (Monte Carlo): in each, every tolerance is drawn on its own, below and above nominal equally likely, evenly
// spread between nominal and the limit on that side; the unit is judged by the worst of its operating corners. Unit k depends on
// seed and k alone, so the number of workers changes nothing. Pass has the exact interval for a share (C. J. Clopper,
// E. S. Pearson, "The use of confidence or fiducial limits illustrated in the case of the binomial", Biometrika 26 (1934),
// from memory). Errors: no samples, an axis that is no field, ctx ended.
func YieldOf(ctx context.Context, d *Design, need Need, o YieldOptions) (*Yield, error) {
	if o.Samples < 1 {
		return nil, fmt.Errorf("building units: %d of them", o.Samples)
	}
	if o.Seed == 0 {
		o.Seed = DefaultSeed
	}
	p, err := newPlan(d, Options{Depth: Quick})
	if err != nil {
		return nil, err
	}
	team, err := newTeam(ctx, d, o.Jobs)
	if err != nil {
		return nil, err
	}
	const batch = 64
	batches := make([][]unit, (o.Samples+batch-1)/batch)
	err = team.run(len(batches), func(w *worker, k int) error {
		for i := k * batch; i < min(o.Samples, (k+1)*batch); i++ {
			if err := ctx.Err(); err != nil {
				return err
			}
			batches[k] = append(batches[k], p.build(w, need, o.Seed, uint64(i)))
		}
		return nil
	})
	if err != nil {
		return nil, fmt.Errorf("building units: %w", err)
	}
	units := slices.Concat(batches...)
	y := &Yield{Samples: o.Samples, Seed: o.Seed}
	passed := 0
	for i := range units {
		if units[i].passes {
			passed++
		}
	}
	y.Pass = float64(passed) / float64(o.Samples)
	y.Interval = clopperPearson(passed, o.Samples, 0.95)
	y.PhaseMargin = p.distribution(units, phaseMargin)
	y.GainMargin = p.distribution(units, gainMargin)
	y.ModulusMargin = p.distribution(units, modulusMargin)
	y.Crossover = p.distribution(units, highCrossover)
	y.RootSumSquare = p.rootSumSquares(team.workers[0])
	return y, nil
}

// unit is one built unit: its worst figures over the operating corners, and at which of them.
type unit struct {
	passes bool
	parts  []float64
	worst  reading
	corner [figures]int8
}

// build draws unit k and judges it at every operating corner.
func (p *plan) build(w *worker, need Need, seed, k uint64) (u unit) {
	r := rand.New(rand.NewPCG(seed, k))
	u.parts = slices.Clone(p.nominal)
	for _, axis := range p.tolerant {
		low, nominal, high := p.box.Min[axis], p.nominal[axis], p.box.Max[axis]
		below, part := r.IntN(2) == 0, r.Float64()
		if below && low < nominal || nominal == high {
			u.parts[axis] = nominal - (nominal-low)*part
		} else {
			u.parts[axis] = nominal + (high-nominal)*part
		}
	}
	for f := range u.worst {
		u.worst[f] = nan
	}
	u.passes = true
	for i, o := range p.points {
		p.operate(u.parts, o)
		w.set(u.parts)
		var v reading
		w.read(&v)
		u.passes = u.passes && p.passes(w, &v, need)
		for f := range v {
			if v[f] < u.worst[f] || math.IsNaN(u.worst[f]) {
				u.worst[f], u.corner[f] = v[f], int8(i)
			}
		}
	}
	return u
}

// passes judges the point just read. A margin that a stable loop does not have holds; a point without a model says nothing.
func (p *plan) passes(w *worker, v *reading, need Need) bool {
	if w.solveErr != nil || w.buildErr != nil {
		return false
	}
	if !w.solution.HasModel {
		return true
	}
	if math.IsNaN(v[modulusMargin]) || !w.figures.Stable {
		return false
	}
	return !(v[phaseMargin] < need.PhaseMargin) && !(v[gainMargin] < need.GainMargin) && !(v[modulusMargin] < need.ModulusMargin)
}

// distribution gathers one figure of all units. The badness of the highest crossover is its negative.
func (p *plan) distribution(units []unit, f figure) Distribution {
	sign := 1.0
	if f == highCrossover {
		sign = -1
	}
	d := Distribution{P01: nan, P05: nan, P50: nan, P95: nan, P99: nan, Worst: nan}
	var values []float64
	worst := -1
	for i := range units {
		v := units[i].worst[f]
		if math.IsNaN(v) {
			d.Without++
			continue
		}
		values = append(values, sign*v)
		if worst < 0 || v < units[worst].worst[f] {
			worst = i
		}
	}
	if worst < 0 {
		return d
	}
	slices.SortFunc(values, cmp.Compare)
	at := func(share float64) float64 { return stat.Quantile(share, stat.LinInterp, values, nil) }
	d.P01, d.P05, d.P50, d.P95, d.P99 = at(0.01), at(0.05), at(0.5), at(0.95), at(0.99)
	u := &units[worst]
	d.Worst = sign * u.worst[f]
	x := slices.Clone(u.parts)
	p.operate(x, p.points[u.corner[f]])
	for i, v := range x {
		d.At = append(d.At, Setting{p.design.Axes[i].Path, v})
	}
	return d
}

// clopperPearson gives the exact interval of a share of which passed out of n were seen.
func clopperPearson(passed, n int, confidence float64) [2]float64 {
	tail := (1 - confidence) / 2
	interval := [2]float64{0, 1}
	k, m := float64(passed), float64(n)
	if passed > 0 {
		interval[0] = distuv.Beta{Alpha: k, Beta: m - k + 1}.Quantile(tail)
	}
	if passed < n {
		interval[1] = distuv.Beta{Alpha: k + 1, Beta: m - k}.Quantile(1 - tail)
	}
	return interval
}

// rootSumSquares finds each margin's own worst operating corner with nominal parts and what every tolerance costs there on its adverse side.
func (p *plan) rootSumSquares(w *worker) RootSumSquares {
	of := func(f figure) RootSumSquare {
		out := RootSumSquare{nan, nan, nan}
		var at []float64
		for _, o := range p.points {
			x := p.at(o)
			if v := p.read(w, x)[f]; v < out.Nominal || math.IsNaN(out.Nominal) {
				out.Nominal, at = v, x
			}
		}
		if math.IsNaN(out.Nominal) {
			return out
		}
		sum := 0.0
		for _, axis := range p.tolerant {
			cost := 0.0
			for _, v := range [2]float64{p.box.Min[axis], p.box.Max[axis]} {
				at[axis] = v
				if there := p.read(w, at)[f]; out.Nominal-there > cost {
					cost = out.Nominal - there
				}
			}
			at[axis] = p.nominal[axis]
			sum += cost * cost
		}
		out.HalfWidth = math.Sqrt(sum)
		out.Low = out.Nominal - out.HalfWidth
		return out
	}
	return RootSumSquares{of(phaseMargin), of(gainMargin), of(modulusMargin)}
}

func (p *plan) read(w *worker, x []float64) (r reading) {
	w.set(x)
	w.read(&r)
	return r
}

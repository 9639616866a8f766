package synthesis

import (
	"context"
	"math"
	"slices"
	"sort"

	"gonum.org/v1/gonum/optimize"

	"halfplane/analysis"
)

// reach is how far one part is moved either way at most, as a ratio; a part that is wrong by more is no part that was swapped.
const reach = 50

// coarse is how many steps a decade is first looked through with.
const coarse = 12

// One looks for a single part that cures everything, for each of them the nearest value that does. The answers come with the smallest change first.
func (p *Problem) One(ctx context.Context) []Answer {
	var answers []Answer
	for _, part := range p.Parts {
		if a, ok := p.nearest(ctx, part); ok {
			answers = append(answers, a)
		}
	}
	sort.SliceStable(answers, func(i, j int) bool { return p.distance(answers[i]) < p.distance(answers[j]) })
	return answers
}

// distance is how far an answer lies from the design as it is: the sum of the parts' changes, as logarithms of their ratio.
func (p *Problem) distance(a Answer) float64 {
	sum := 0.0
	for _, s := range a.Changes {
		sum += math.Abs(math.Log(s.Value / p.valueOf(Part{Path: s.Path})))
	}
	return sum
}

// nearest moves one part either way in coarse steps to the first value that meets everything, and then comes back on preferred values as far as
// that holds.
func (p *Problem) nearest(ctx context.Context, part Part) (best Answer, ok bool) {
	now := p.valueOf(part)
	if !(now > 0) {
		return best, false
	}
	for _, direction := range [...]float64{1, -1} {
		for step := 1; float64(step) <= coarse*math.Log10(reach) && ctx.Err() == nil; step++ {
			value := now * math.Pow(10, direction*float64(step)/coarse)
			if value < part.Low || value > part.High {
				break
			}
			if out := p.try(ctx, []analysis.Setting{{Path: part.Path, Value: value}}); out.Violation > 0 {
				continue
			}
			if a, found := p.settle(ctx, part, now*math.Pow(10, direction*float64(step-1)/coarse), value); found && (!ok || p.distance(a) < p.distance(best)) {
				best, ok = a, true
			}
			break
		}
	}
	return best, ok
}

// settle tries the preferred values from one end, where something is still broken, to the other, where nothing is, and a little beyond.
func (p *Problem) settle(ctx context.Context, part Part, from, to float64) (Answer, bool) {
	values := part.near(to, 24)
	slices.SortFunc(values, func(a, b float64) int {
		x, y := math.Abs(math.Log(a/from)), math.Abs(math.Log(b/from))
		if x < y {
			return -1
		}
		return 1
	})
	for _, v := range values {
		if (v-from)*(to-from) < 0 {
			continue
		}
		changes := []analysis.Setting{{Path: part.Path, Value: v}}
		if out := p.try(ctx, changes); out.Violation == 0 {
			return Answer{changes, out}, true
		}
	}
	return Answer{}, false
}

// Some looks for values of some of the parts together, beginning at a choice of them: a simplex search (Nelder and Mead 1965, in
// logarithms) first down to where everything is met and then towards the fastest loop, or with close towards the smallest change; then preferred values around
// its end.
func (p *Problem) Some(ctx context.Context, parts []Part, start []float64, evaluations int, close bool) (Answer, bool) {
	cost := func(x []float64) float64 {
		if ctx.Err() != nil {
			return math.Inf(1)
		}
		changes := make([]analysis.Setting, len(parts))
		outside := 0.0
		for i, part := range parts {
			v := math.Exp(x[i])
			held := math.Min(math.Max(v, part.Low), part.High)
			outside += math.Abs(math.Log(v / held))
			changes[i] = analysis.Setting{Path: part.Path, Value: held}
		}
		out := p.try(ctx, changes)
		switch {
		case math.IsInf(out.Violation, 1):
			return 1e3 + outside
		case out.Violation > 0:
			return out.Violation + outside
		case close:
			return -1/(1+p.distance(Answer{Changes: changes})) + outside
		}
		return -1 - 0.1*math.Log10(math.Max(out.Crossover, 1)) + outside
	}
	x := make([]float64, len(start))
	for i, v := range start {
		x[i] = math.Log(math.Min(math.Max(v, parts[i].Low), parts[i].High))
	}
	r, err := optimize.Minimize(optimize.Problem{Func: cost}, x, &optimize.Settings{FuncEvaluations: evaluations, Converger: &optimize.FunctionConverge{Absolute: 1e-3, Iterations: 25}},
		&optimize.NelderMead{SimplexSize: 0.35})
	if r == nil || err != nil && r.Status == optimize.NotTerminated {
		return Answer{}, false
	}
	return p.round(ctx, parts, r.X, close)
}

// round walks from preferred values around a point to better ones: each part a step or two either way, until none gains.
func (p *Problem) round(ctx context.Context, parts []Part, x []float64, close bool) (Answer, bool) {
	changes := make([]analysis.Setting, len(parts))
	for i, part := range parts {
		changes[i] = analysis.Setting{Path: part.Path, Value: part.near(math.Exp(x[i]), 1)[0]}
	}
	better := func(a, b Outcome, ca, cb []analysis.Setting) bool {
		switch {
		case a.Violation != b.Violation:
			return a.Violation < b.Violation
		case close:
			return p.distance(Answer{Changes: ca}) < p.distance(Answer{Changes: cb})-1e-9
		}
		return a.Crossover > b.Crossover*(1+1e-3)
	}
	best := p.try(ctx, changes)
	for range 12 {
		gained := false
		for i, part := range parts {
			for _, v := range part.near(changes[i].Value, 5) {
				tried := slices.Clone(changes)
				tried[i].Value = v
				if out := p.try(ctx, tried); better(out, best, tried, changes) {
					changes, best, gained = tried, out, true
				}
			}
		}
		if !gained || ctx.Err() != nil {
			break
		}
	}
	return Answer{p.moved(changes), best}, best.Violation == 0 && ctx.Err() == nil
}

// moved leaves out what keeps its value.
func (p *Problem) moved(changes []analysis.Setting) []analysis.Setting {
	return slices.DeleteFunc(slices.Clone(changes), func(s analysis.Setting) bool {
		now := p.valueOf(Part{Path: s.Path})
		return math.Abs(s.Value-now) <= 1e-9*math.Abs(now)
	})
}

// Two looks for two parts that cure everything together, pair by pair, and gives the smallest change of those that it finds.
func (p *Problem) Two(ctx context.Context) (best Answer, ok bool) {
	for i := range p.Parts {
		for j := i + 1; j < len(p.Parts) && ctx.Err() == nil; j++ {
			parts := []Part{p.Parts[i], p.Parts[j]}
			start := []float64{p.valueOf(parts[0]), p.valueOf(parts[1])}
			if !(start[0] > 0) || !(start[1] > 0) {
				continue
			}
			if a, found := p.Some(ctx, parts, start, 70, true); found && (!ok || p.distance(a) < p.distance(best)) {
				best, ok = a, true
			}
		}
	}
	return best, ok
}

package analysis

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"halfplane/analysis/plant"
)

// ProveOptions of a proof. Jobs below 1 means one for each processor; Boxes is the budget for each margin, 0 a million; Found is
// what Analyse said of the same design, nil: it is found first.
type ProveOptions struct {
	Jobs  int
	Boxes int
	Found *Result
}

const defaultBoxes = 1 << 20

// Prove decides for each margin asked for whether it holds at every point of the box of input, load and tolerances and at every
// frequency, not only at points that were looked at.
//
// Refuted comes with a point at which the ordinary analysis finds less. Proved means: the loop is stable at nominal; over the whole box the
// loop gain keeps out of the set that the margin forbids, which holds −1, at every frequency of the range in which margins
// count, and is not −1 outside it; |T| > 1 below and |T| < 1 above all of that. Numerator plus denominator of 1 + T is then nowhere zero
// on the imaginary axis (where the denominator may vanish the numerator is proved to be larger), so no closed-loop pole can have crossed it (the zero exclusion principle; R. A. Frazer, W. J. Duncan, "On the criteria for the
// stability of small motions", Proc. Royal Society A 124 (1929), from memory), and the margin holds. Every figure over a part
// of the box is an affine form rounded outward (package interval); parts that cannot be settled are halved (branch and bound),
// along the axis that moves the loop most, until the budget is spent. A duty and continuous conduction are part of what is
// proved. The result does not depend on Jobs. Errors: those of Analyse, or ctx ended.
func Prove(ctx context.Context, d *Design, need Need, o ProveOptions) (*Proof, error) {
	if o.Found == nil {
		found, err := Analyse(ctx, d, Options{Depth: Full, Jobs: o.Jobs})
		if err != nil {
			return nil, err
		}
		o.Found = found
	}
	if o.Boxes < 1 {
		o.Boxes = defaultBoxes
	}
	p, err := newPlan(d, Options{})
	if err != nil {
		return nil, err
	}
	team, err := newTeam(ctx, d, o.Jobs)
	if err != nil {
		return nil, err
	}
	proof := &Proof{}
	for _, margin := range [...]struct {
		out   **Certificate
		f     figure
		limit float64
	}{{&proof.PhaseMargin, phaseMargin, need.PhaseMargin}, {&proof.GainMargin, gainMargin, need.GainMargin}, {&proof.ModulusMargin, modulusMargin, need.ModulusMargin}} {
		if math.IsNaN(margin.limit) {
			continue
		}
		c, err := certify(ctx, p, team, margin.f, margin.limit, &o)
		if err != nil {
			return nil, fmt.Errorf("proving the margins: %w", err)
		}
		*margin.out = c
	}
	return proof, nil
}

// certify is Prove for one margin.
func certify(ctx context.Context, p *plan, team *team, f figure, limit float64, o *ProveOptions) (*Certificate, error) {
	c := &Certificate{Verdict: Undecided, Limit: limit, Value: nan, Left: 1}
	for i := range o.Found.Corners {
		k := &o.Found.Corners[i]
		if k.Loop == nil {
			continue
		}
		if v := f.badness(k); v < limit-1e-9 || !k.Loop.Stable {
			if c.Verdict == Refuted && !(v < c.Value) {
				continue
			}
			c.Verdict, c.At, c.Value, c.Left = Refuted, k.At, v, 1
		}
	}
	if c.Verdict == Refuted {
		return c, nil
	}
	e, why := enclose(p.design)
	if why != "" {
		c.Why = why
		return c, nil
	}
	b := &boxProof{enclosed: e, plan: p, f: f, limit: limit, set: setOf(f, limit)}
	// The one point at which the loop must be seen to be stable: everywhere else it follows.
	at, v, why := b.judge(team.workers[0], p.nominal)
	switch {
	case at != nil:
		c.Verdict, c.At, c.Value = Refuted, b.settings(at), v
		return c, nil
	case why != "":
		c.Why = why
		return c, nil
	}
	return c, b.run(ctx, team, c, o.Boxes)
}

// setOf is the set that the loop gain keeps out of; a margin that is exactly the limit holds.
func setOf(f figure, limit float64) forbidden {
	switch f {
	case phaseMargin:
		return phaseSet{max(limit, 0) * math.Pi / 180}
	case gainMargin:
		return gainSet{max(limit, 0) * math.Ln10 / 20}
	default:
		return discSet{max(limit, 0)}
	}
}

// boxProof is a proof under way.
type boxProof struct {
	*enclosed
	*plan
	f     figure
	limit float64
	set   forbidden
	whole cell
}

// wave is how many tasks are worked on before their children are sorted in: enough for every worker, and the same for any number of them.
const wave = 64

// run is the branch and bound: the latest tasks first, so that few are kept.
func (b *boxProof) run(ctx context.Context, team *team, c *Certificate, budget int) error {
	var first task
	for _, axis := range b.axes {
		first.low, first.high = append(first.low, b.box.Min[axis]), append(first.high, b.box.Max[axis])
	}
	b.whole = cell{slices.Clone(first.low), slices.Clone(first.high)}
	first.open = b.stretches()
	stack := []task{first}
	var stuck []task
	for len(stack) > 0 && c.Boxes < budget && len(stuck) < wave {
		n := min(wave, len(stack))
		batch := slices.Clone(stack[len(stack)-n:])
		stack = stack[:len(stack)-n]
		outcomes := make([]outcome, n)
		err := team.run(n, func(w *worker, unit int) error {
			if err := ctx.Err(); err != nil {
				return err
			}
			outcomes[unit] = b.settle(w, &batch[unit])
			return nil
		})
		if err != nil {
			return err
		}
		for i := range outcomes {
			o := &outcomes[i]
			c.Boxes += o.looked
			if o.counter != nil {
				c.Verdict, c.At, c.Value, c.Left = Refuted, b.settings(o.counter), o.value, 1
				return nil
			}
			if o.outside != "" && c.Why == "" {
				c.Why = o.outside
			}
			if o.stuck != nil {
				stuck = append(stuck, *o.stuck)
			}
			stack = append(stack, o.children...)
		}
		if c.Why != "" {
			return nil
		}
	}
	b.conclude(c, append(stuck, stack...))
	return nil
}

// conclude gives the verdict from what was left.
func (b *boxProof) conclude(c *Certificate, left []task) {
	c.Left = 0
	if len(left) == 0 {
		c.Verdict = Proved
		return
	}
	largest, most := 0, -1.0
	for i := range left {
		v := b.volume(&left[i].cell)
		c.Left += v
		if v > most {
			largest, most = i, v
		}
	}
	c.Left = min(c.Left, 1)
	x := slices.Clone(b.nominal)
	for i, axis := range b.axes {
		x[axis] = left[largest].low[i] + (left[largest].high[i]-left[largest].low[i])/2
	}
	c.At = b.settings(x)
	c.Why = fmt.Sprintf("%d boxes were looked at, and parts of the box are left where the margin comes close to the limit", c.Boxes)
}

// stretches divides all frequencies: the range of the margins (theory sheet section 8), some decades on either side, and the ends.
func (b *boxProof) stretches() []segment {
	least, most := b.stage.FilterFrequency, b.stage.FilterFrequency
	if i, moves := b.symbol["switching-frequency"]; moves {
		multiple := b.point.Circuit.Topology.FilterMultiple()
		least, most = b.whole.low[i]*multiple, b.whole.high[i]*multiple
	}
	low, high := math.Log(2*math.Pi*1e-6*least), math.Log(2*math.Pi*10*most)
	const below, above = 9, 5
	return []segment{{fromZero, 0, low - below}, {outRange, low - below, low}, {inRange, low, high}, {outRange, high, high + above}, {toEnd, high + above, 0}}
}

func (b *boxProof) settings(x []float64) []Setting {
	at := make([]Setting, len(x))
	for i, v := range x {
		at[i] = Setting{b.plan.design.Axes[i].Path, v}
	}
	return at
}

// judge evaluates a point by the ordinary analysis: a counterexample, a point outside what the proof covers, or neither.
func (b *boxProof) judge(w *worker, x []float64) (counter []float64, value float64, outside string) {
	w.set(x)
	switch {
	case errors.Is(w.solveErr, plant.ErrUnreachable):
		return nil, nan, "at some points no duty reaches the output voltage"
	case w.solveErr != nil || w.buildErr != nil:
		return nil, nan, "at some points the numbers are outside the models"
	case w.solution.Mode != plant.Continuous:
		return nil, nan, fmt.Sprintf("a proof covers continuous conduction, and part of the range is discontinuous (for example at %.3g V in and %.3g A)",
			w.point.Circuit.InputVoltage, w.point.Circuit.LoadCurrent)
	}
	if !w.hasLoop() || w.meter.Measure(&w.gain, w.solution.FilterFrequency, &w.figures) != nil {
		return nil, nan, "at some points the loop cannot be measured"
	}
	v := b.f.ofLoop(&w.figures, nan)
	if v < b.limit-1e-9 || !w.figures.Stable {
		return x, v, ""
	}
	return nil, nan, ""
}

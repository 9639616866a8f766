package analysis

import (
	"context"
	"fmt"
)

// Depth says how thoroughly the box of tolerances is searched.
type Depth int

const (
	Quick Depth = iota + 1 // all extremes of inductance, capacitance and ESR; the rest by the sign of its sensitivity
	Full                   // all extremes of everything, the conduction boundary, the inside, and refinement from the worst points
)

// String gives the command line's name of the depth.
func (d Depth) String() string {
	switch d {
	case Quick:
		return "quick"
	case Full:
		return "full"
	}
	return "unknown depth"
}

// Options of an analysis. A Depth of 0 is Full; Jobs below 1 means one for each processor.
type Options struct {
	Depth   Depth
	Jobs    int
	KeepAll bool // Result.Corners holds every point analysed, not only those that show or decide something
}

// Analyse finds the worst figures of a design over its operating range and tolerances (extreme value analysis). It walks nominal,
// every operating corner, and at each of them the extremes of the tolerances; in full depth then the boundary of the conduction modes, the
// inside of the ranges, and from the worst points on downhill within the box. The result does not depend on Jobs. Errors: an
// axis that is no field, numbers outside the models' domain at nominal, or ctx ended. A point that cannot be modelled is
// a corner without a loop.
func Analyse(ctx context.Context, d *Design, o Options) (*Result, error) {
	p, err := newPlan(d, o)
	if err != nil {
		return nil, err
	}
	team, err := newTeam(ctx, d, o.Jobs)
	if err != nil {
		return nil, err
	}
	h := &hunt{ctx: ctx, plan: p, team: team, all: newTally()}
	r := &Result{Depth: Quick}
	if p.full {
		r.Depth = Full
	}
	if err := h.follow(r); err != nil {
		return nil, fmt.Errorf("analysing the design: %w", err)
	}
	return r, nil
}

// hunt is one analysis under way.
type hunt struct {
	ctx  context.Context
	plan *plan
	team *team
	kept [][]Corner // in the order found
	all  *tally
}

// follow goes through the stages and fills r.
func (h *hunt) follow(r *Result) error {
	quick, err := h.operating()
	if err != nil {
		return err
	}
	left := leftOut{axes: len(h.plan.other)}
	if h.plan.full {
		left, err = h.deepen(quick)
	} else {
		err = h.quickKinks(quick)
	}
	if err != nil {
		return err
	}
	r.gather(h.plan, h.kept)
	r.Analysed = h.all.points
	if h.plan.keepAll {
		r.Analysed = len(r.Corners)
	}
	r.Worst = worsts(r.Corners)
	r.Complete = left.axes == 0
	r.Method = h.plan.method(r.Analysed, left)
	if err := r.explain(h.plan, h.team); err != nil || h.plan.full {
		return err
	}
	return h.quickComparator(r)
}

// deepen is what full depth adds to the operating corners.
func (h *hunt) deepen(quick []*tally) (left leftOut, err error) {
	moving, err := h.moving()
	if err != nil {
		return left, err
	}
	corners, left, err := h.extremes(quick, moving)
	if err != nil {
		return left, err
	}
	starts := append([]*tally{}, corners...)
	for _, stage := range []func([]*tally, []int) ([]*tally, error){h.kinks, h.insides} {
		found, err := stage(corners, moving)
		if err != nil {
			return left, err
		}
		starts = append(starts, found...)
	}
	if err := h.settle(starts, moving); err != nil {
		return left, err
	}
	if err := h.comparator(corners, moving); err != nil {
		return left, err
	}
	return left, h.edges()
}

// run does units of work in parallel, each with a search of its own, and takes in what they found in the order of the units.
func (h *hunt) run(units int, do func(s *search, unit int) error) ([]*tally, error) {
	searches := make([]*search, units)
	err := h.team.run(units, func(w *worker, unit int) error {
		s := newSearch(h.ctx, h.plan, w)
		searches[unit] = s
		if err := do(s, unit); err != nil {
			return err
		}
		return s.ended
	})
	if err != nil {
		return nil, err
	}
	found := make([]*tally, units)
	for i, s := range searches {
		h.kept = append(h.kept, s.corners)
		h.all.merge(s.tally)
		found[i] = s.tally
	}
	return found, nil
}

// method says in words how the worst corners were found, and what was left out.
func (p *plan) method(analysed int, left leftOut) string {
	switch {
	case p.full && left.axes > 0:
		return fmt.Sprintf("extreme-value, %d corners, refined; %d extremes at each operating corner, %d more tolerances by sensitivity (together %.2g° of phase margin)",
			analysed, mostVertices, left.axes, left.degree)
	case p.full:
		return fmt.Sprintf("extreme-value, %d corners, refined", analysed)
	case left.axes > 0:
		return fmt.Sprintf("extreme-value, %d corners, %d tolerances by sensitivity", analysed, left.axes)
	}
	return fmt.Sprintf("extreme-value, %d corners", analysed)
}

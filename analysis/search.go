package analysis

import (
	"context"
	"encoding/binary"
	"math"
)

// search evaluates points for one unit of work. Those that it visits it keeps as corners, each once; those that it probes only
// leave their figures in the tally.
type search struct {
	ctx     context.Context
	plan    *plan
	worker  *worker
	seen    map[string]int // assignment → index into corners
	corners []Corner
	tally   *tally
	key     []byte
	ended   error // ctx ended: values no longer count
}

func newSearch(ctx context.Context, p *plan, w *worker) *search {
	return &search{ctx: ctx, plan: p, worker: w, seen: make(map[string]int), tally: newTally()}
}

// visit evaluates an assignment unless it is known and gives its index. The error is that of the corner's numbers.
func (s *search) visit(x []float64) (int, error) {
	s.key = appendKey(s.key[:0], x)
	if i, ok := s.seen[string(s.key)]; ok {
		return i, nil
	}
	s.worker.setShown(x)
	c, err := s.worker.corner()
	c.At = s.worker.settings()
	s.seen[string(s.key)] = len(s.corners)
	s.corners = append(s.corners, c)
	var r reading
	for f := range r {
		r[f] = figure(f).badness(&c)
	}
	s.tally.enter(x, &r)
	return len(s.corners) - 1, err
}

// probe evaluates an assignment and gives its figures. Once ctx has ended nothing is evaluated and no figure exists.
func (s *search) probe(x []float64) (r reading) {
	if s.ended == nil {
		s.ended = s.ctx.Err()
	}
	if s.ended != nil {
		for f := range r {
			r[f] = nan
		}
		return r
	}
	if s.plan.keepAll {
		at, _ := s.visit(x)
		for f := range r {
			r[f] = figure(f).badness(&s.corners[at])
		}
		return r
	}
	s.worker.set(x)
	s.worker.read(&r)
	s.tally.enter(x, &r)
	return r
}

// valueOf judges assignments by a figure.
func (s *search) valueOf(f figure) func(x []float64) float64 {
	return func(x []float64) float64 {
		r := s.probe(x)
		return r[f]
	}
}

// keep visits the worst point of every figure in the tally, so that it is among the corners.
func (s *search) keep() {
	for f := range figures {
		if x := s.tally.at[f]; x != nil {
			_, _ = s.visit(x)
		}
	}
}

// vertices visits one operating corner with nominal parts and at all extremes of what stores energy.
func (s *search) vertices(o operatingPoint) error {
	s.corners = make([]Corner, 0, 1+1<<len(s.plan.store))
	x := s.plan.at(o)
	if _, err := s.visit(x); err != nil && isNominal(s.plan, x) {
		return err
	}
	s.plan.box.Vertices(x, s.plan.store, func(x []float64) bool {
		if s.ended = s.ctx.Err(); s.ended == nil {
			_, _ = s.visit(x)
		}
		return s.ended == nil
	})
	return s.ended
}

func worstOf(f figure, corners []Corner) int {
	at, least := -1, nan
	for i := range corners {
		if v := f.badness(&corners[i]); v < least || at < 0 && !math.IsNaN(v) {
			at, least = i, v
		}
	}
	return at
}

func valuesOf(c *Corner, x []float64) []float64 {
	for i := range x {
		x[i] = c.At[i].Value
	}
	return x
}

func isNominal(p *plan, x []float64) bool {
	for i := range x {
		if x[i] != p.nominal[i] {
			return false
		}
	}
	return true
}

// appendKey makes an assignment comparable.
func appendKey(key []byte, x []float64) []byte {
	for _, v := range x {
		key = binary.LittleEndian.AppendUint64(key, math.Float64bits(v))
	}
	return key
}

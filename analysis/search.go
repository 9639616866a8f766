package analysis

import (
	"context"
	"encoding/binary"
	"math"
)

// search evaluates points for one unit of work and remembers them, so that none is evaluated twice.
type search struct {
	ctx     context.Context
	plan    *plan
	worker  *worker
	seen    map[string]int // assignment → index into corners
	corners []Corner
	key     []byte
	ended   error // ctx ended: values no longer count
}

func newSearch(ctx context.Context, p *plan, w *worker) *search {
	return &search{ctx: ctx, plan: p, worker: w, seen: make(map[string]int)}
}

// visit evaluates an assignment unless it is known and gives its index. The error is that of the corner's numbers.
func (s *search) visit(x []float64) (int, error) {
	s.key = appendKey(s.key[:0], x)
	if i, ok := s.seen[string(s.key)]; ok {
		return i, nil
	}
	s.worker.set(x)
	c, err := s.worker.corner()
	c.At = s.worker.settings()
	s.seen[string(s.key)] = len(s.corners)
	s.corners = append(s.corners, c)
	return len(s.corners) - 1, err
}

// value judges an assignment by a figure; a corner that cannot be modelled has no figures.
func (s *search) value(f figure, x []float64) float64 {
	if s.ended != nil {
		return nan
	}
	if s.ended = s.ctx.Err(); s.ended != nil {
		return nan
	}
	i, _ := s.visit(x)
	return f.badness(&s.corners[i])
}

// operating works through one operating corner: nominal parts, all vertices of what stores energy, then for every figure the
// other tolerances by the sign of their sensitivity at its worst vertex, and in full depth from there a coordinate search over all
// extremes.
func (s *search) operating(o operatingPoint) error {
	x := s.plan.at(o)
	if _, err := s.visit(x); err != nil && isNominal(s.plan, x) {
		return err
	}
	s.plan.box.Vertices(x, s.plan.store, func(x []float64) bool {
		s.value(phaseMargin, x)
		return s.ended == nil
	})
	for f := range figures {
		at := s.worst(f)
		if at < 0 {
			continue
		}
		x = s.assignment(at, x)
		s.guide(f, x, &s.corners[at])
		s.value(f, x)
	}
	if s.plan.full {
		for f := range figures {
			s.descend(f, x)
		}
	}
	return s.ended
}

// descend searches from the worst corner so far.
func (s *search) descend(f figure, x []float64) {
	const rounds = 6 // a round that finds nothing ends it; three are typical
	at := s.worst(f)
	if at < 0 {
		return
	}
	x = s.assignment(at, x)
	s.plan.box.Descend(x, f.badness(&s.corners[at]), s.plan.axesOf(f), rounds, func(x []float64) float64 { return s.value(f, x) })
}

// worst gives the corner with the lowest badness, −1: the figure exists nowhere.
func (s *search) worst(f figure) int { return worstOf(f, s.corners) }

func worstOf(f figure, corners []Corner) int {
	at, least := -1, nan
	for i := range corners {
		if v := f.badness(&corners[i]); v < least || at < 0 && !math.IsNaN(v) {
			at, least = i, v
		}
	}
	return at
}

// assignment writes a corner's values into x.
func (s *search) assignment(corner int, x []float64) []float64 {
	return valuesOf(&s.corners[corner], x)
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

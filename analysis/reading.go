package analysis

import (
	"errors"
	"math"

	"halfplane/analysis/plant"
)

// reading holds every tracked figure of one point as its badness: the lower, the worse; NaN: the figure does not exist there.
type reading [figures]float64

// read gives the tracked figures of the point that was set, without keeping anything.
func (w *worker) read(r *reading) {
	for f := range r {
		r[f] = nan
	}
	if reached := !errors.Is(w.solveErr, plant.ErrUnreachable); w.solveErr == nil || !reached {
		for f := range figures {
			if f.ofStage() {
				r[f] = f.ofPlant(&w.solution, reached)
			}
		}
	}
	if !w.hasLoop() || w.meter.Measure(&w.gain, w.solution.FilterFrequency, &w.figures) != nil {
		return
	}
	for f := range figures {
		if !f.ofStage() {
			r[f] = f.ofLoop(&w.figures, w.solution.RHPZero)
		}
	}
}

// tally remembers the worst point of every figure among those that were entered.
type tally struct {
	worst  reading
	at     [figures][]float64 // nil: the figure exists at none of them
	store  []float64          // of at
	points int
}

func newTally() *tally {
	t := new(tally)
	for f := range t.worst {
		t.worst[f] = nan
	}
	return t
}

// enter counts a point; x is copied where it is kept. Of points that are equal but for rounding the first counts.
func (t *tally) enter(x []float64, r *reading) {
	t.points++
	for f, v := range r {
		t.offer(figure(f), x, v)
	}
}

func (t *tally) offer(f figure, x []float64, v float64) {
	if math.IsNaN(v) || t.at[f] != nil && !(v < t.worst[f]-1e-10*math.Abs(t.worst[f])) {
		return
	}
	t.worst[f] = v
	if t.at[f] == nil {
		if t.store == nil {
			t.store = make([]float64, int(figures)*len(x))
		}
		t.at[f] = t.store[int(f)*len(x) : (int(f)+1)*len(x) : (int(f)+1)*len(x)]
	}
	copy(t.at[f], x)
}

// merge takes in another tally, whose points come after those of t.
func (t *tally) merge(o *tally) {
	t.points += o.points
	for f := range figures {
		if o.at[f] != nil {
			t.offer(f, o.at[f], o.worst[f])
		}
	}
}

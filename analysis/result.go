package analysis

import "slices"

// gather puts the corners of all units in order: nominal, the operating corners with nominal parts, everything else, each
// assignment once. The first units are the operating corners, which begin with nominal parts; the one after them is nominal.
func (r *Result) gather(p *plan, found [][]Corner) {
	total := 0
	for _, list := range found {
		total += len(list)
	}
	r.Corners = make([]Corner, 0, total)
	known := make(map[string]int, total)
	var key []byte
	x := make([]float64, len(p.nominal))
	add := func(c *Corner) bool {
		key = appendKey(key[:0], valuesOf(c, x))
		if i, have := known[string(key)]; have {
			if r.Corners[i].Ripple == nil {
				r.Corners[i].Ripple = c.Ripple
			}
			return false
		}
		known[string(key)] = len(r.Corners)
		r.Corners = append(r.Corners, *c)
		return true
	}
	points := len(p.points)
	add(&found[points][0])
	for _, list := range found[:points] {
		if add(&list[0]) {
			r.Operating++
		}
	}
	for _, list := range found {
		for i := range list {
			add(&list[i])
		}
	}
}

// explain completes nominal, the operating corners and every corner that a worst entry refers to. The figures with ripple, the
// costliest of all, are added at nominal and at the corners that decide a margin; in full depth at the operating corners too.
func (r *Result) explain(p *plan, t *team) error {
	var list []int
	ripple := make(map[int]bool) // every listed corner is a key
	mark := func(i int, decides bool) {
		if _, known := ripple[i]; !known {
			list = append(list, i)
		}
		ripple[i] = ripple[i] || decides
	}
	for i := range r.Operating + 1 {
		mark(i, i == 0 || p.full)
	}
	r.Worst.each(func(w *Worst, margin bool) { mark(w.Corner, margin || p.full) })
	return t.run(len(list), func(w *worker, unit int) error {
		c := &r.Corners[list[unit]]
		w.set(valuesOf(c, make([]float64, len(p.nominal))))
		w.explain(c, ripple[list[unit]])
		return nil
	})
}

// Add takes in one more analysed point, as At gives it, and finds the worst figures anew.
func (r *Result) Add(c Corner) {
	r.Corners = append(r.Corners, c)
	r.Worst = worsts(r.Corners)
}

// Has says whether a point is among the corners kept.
func (r *Result) Has(at []Setting) bool {
	return slices.ContainsFunc(r.Corners, func(c Corner) bool { return slices.Equal(c.At, at) })
}

package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
)

// rating is a limit of a part that a figure of some corner is held against: above the rating itself is an error, above the
// derated rating a warning.
type rating struct {
	pointer string
	what    string // the stress in words: "the switch blocks"
	unit    string
	derate  Threshold
	of      func(*Case, *analysis.Corner) float64
	sum     func(*Case, *analysis.Corner) string // what the figure is made of at a corner
	decided []string                             // pointers of the other values that decide it
}

func (r rating) applies(c *Case) bool { return c.Spec.Has(r.pointer) }

func (r rating) decide(c *Case) []Finding {
	q, _ := c.Spec.Quantity(r.pointer)
	rated, derating := q.Min, c.threshold(r.derate)
	corner, stress := c.worstStage(func(k *analysis.Corner) float64 { return r.of(c, k) })
	if corner == nil || stress <= derating*rated {
		return nil
	}
	f := c.atCorner(r.pointer, corner)
	limit := rated
	if stress > rated {
		f.Severity = Error
		f.Message = fmt.Sprintf("%s %s, above its rating of %s", r.what, number(stress, r.unit), number(rated, r.unit))
	} else {
		f.Severity = Warning
		limit = derating * rated
		f.Message = fmt.Sprintf("%s %s, above %s of its rating of %s (limit %s)",
			r.what, number(stress, r.unit), percent(derating), number(rated, r.unit), number(limit, r.unit))
	}
	f.Formula = fmt.Sprintf("%s = %s; at most %s", r.sum(c, corner), number(stress, r.unit), number(rated, r.unit))
	if limit < rated {
		f.Formula = fmt.Sprintf("%s = %s; at most %s · %s = %s", r.sum(c, corner), number(stress, r.unit), short(derating), number(rated, r.unit), number(limit, r.unit))
	}
	f.Measured, f.Limit, f.Nominal = asNumber(stress, r.unit), asNumber(limit, r.unit), asNumber(r.of(c, c.nominal()), r.unit)
	c.relate(&f, "decides the stress", r.decided...)
	return []Finding{f}
}

// atReached reads a figure of the operating point, NaN at a corner out of reach.
func atReached(k *analysis.Corner, read func() float64) float64 {
	if !k.Reached {
		return math.NaN()
	}
	return read()
}

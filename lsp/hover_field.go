package lsp

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"halfplane/schema"
)

// aboutField writes what a field is, its value in SI units with its spread, and what the value sets in this design.
func (p *place) aboutField(info schema.FieldInfo, pointer string) {
	unit := info.Dimension.Unit()
	title := info.Title
	if title == "" {
		title = pointer[strings.LastIndexByte(pointer, '/')+1:]
	}
	p.title(title, unit)
	p.say(info.Description)
	if q, stale, ok := p.quantity(info, pointer); ok {
		p.list(append(append(inWords(q, stale), p.sets(pointer)...), p.moves(pointer)...))
		return
	}
	if len(info.Names) > 0 {
		p.say("One of " + strings.Join(info.Names, ", ") + ".")
	}
	if info.Default != "" && p.doc.Find(pointer) == nil {
		p.say("Left out: " + info.Default + ".")
	}
}

// quantity gives the number that stands at the place: from the check of this text, else read from its own words (a file
// with a mistake elsewhere still shows its values), else from the newest text that could be checked.
func (p *place) quantity(info schema.FieldInfo, pointer string) (q schema.Quantity, stale, ok bool) {
	if p.fresh != nil && p.fresh.file.Spec != nil {
		q, ok = p.fresh.file.Spec.Quantity(pointer)
		return q, false, ok
	}
	if info.Dimension == 0 {
		return q, false, false
	}
	if n := p.doc.Find(pointer); n != nil && n.Kind == schema.Scalar {
		if q, err := schema.ParseQuantity(n.Value, info.Dimension); err == nil {
			return q, false, true
		}
	}
	if p.good != nil && p.good.file.Spec != nil {
		q, ok = p.good.file.Spec.Quantity(pointer)
	}
	return q, true, ok
}

// inWords gives a quantity as lines: the value, the plain SI number where that reads otherwise, the spread.
func inWords(q schema.Quantity, stale bool) []string {
	line := figure(q.Nominal, q.Unit)
	if !readsAs(line, q) {
		line += " = " + strings.TrimSpace(strconv.FormatFloat(q.Nominal, 'g', 6, 64)+" "+q.Unit)
	}
	if q.AssumedNominal {
		line += " (midpoint, none is stated)"
	}
	if stale {
		line += " (of the last text that could be checked)"
	}
	out := []string{line}
	if q.Spread {
		out = append(out, "from "+figure(q.Min, q.Unit)+" to "+figure(q.Max, q.Unit)+percent(q))
	}
	return out
}

// readsAs tells whether a shown value is the plain SI number already: no prefix, no digit lost.
func readsAs(shown string, q schema.Quantity) bool {
	number, unit, _ := strings.Cut(strings.Replace(shown, "°", " deg", 1), " ")
	value, err := strconv.ParseFloat(strings.Replace(number, "−", "-", 1), 64)
	return err == nil && value == q.Nominal && unit == q.Unit
}

// percent gives a spread relative to the nominal value.
func percent(q schema.Quantity) string {
	if q.Nominal == 0 {
		return ""
	}
	low, high := 100*(q.Min/q.Nominal-1), 100*(q.Max/q.Nominal-1)
	if q.Nominal < 0 {
		low, high = high, low
	}
	return fmt.Sprintf(" (%s to %s)", signed(low), signed(high))
}

func signed(percent float64) string {
	s := strconv.FormatFloat(math.Abs(percent), 'g', 3, 64) + " %"
	switch {
	case s == "0 %":
		return s
	case percent < 0:
		return "−" + s
	}
	return "+" + s
}

// figure is a value for a person, "" for one that does not exist.
func figure(value float64, unit string) string {
	if math.IsNaN(value) {
		return ""
	}
	return schema.Format(value, unit)
}

package rules

import (
	"fmt"
	"strconv"
	"strings"

	"halfplane/schema"
)

var assumedNominal = Rule{
	Name:     "assumed-nominal",
	Group:    Declared,
	Severity: Note,
	Sentence: "A range wider than 2 to 1 states its nominal value, so that nobody has to assume the midpoint.",
	Formula:  "max ≤ 2 · min, or nominal is given",
	Source:   "common practice",
	Example:  "output-capacitor: {capacitance: 220 uF, esr: {min: 8 mΩ, max: 25 mΩ}}   # 16.5 mΩ is assumed",
	Hint:     "Nominal figures, and every stated figure, are computed with the midpoint. Write the value that the data sheet calls typical if it is another; the extremes stay as they are.",
	Reads:    Declaration,
	Decide: func(c *Case) []Finding {
		var findings []Finding
		c.eachBareRange(func(pointer string, q schema.Quantity) {
			if !q.AssumedNominal || q.Max <= 2*q.Min || isLimit(pointer) {
				return
			}
			f := c.at(pointer)
			f.Message = fmt.Sprintf("%s runs from %s to %s without a nominal value; the midpoint, %s, is assumed",
				placeWords(pointer), number(q.Min, q.Unit), number(q.Max, q.Unit), number(q.Nominal, q.Unit))
			f.Formula = fmt.Sprintf("(%s + %s)/2 = %s", number(q.Min, q.Unit), number(q.Max, q.Unit), number(q.Nominal, q.Unit))
			f.Nominal = asNumber(q.Nominal, q.Unit)
			if q.Min > 0 {
				f.Measured = asNumber(q.Max/q.Min, "")
				f.Limit = asNumber(2, "")
			}
			findings = append(findings, f)
		})
		return findings
	},
}

// isLimit says whether a range is a pair of limits, of which no nominal is ever used.
func isLimit(pointer string) bool {
	if strings.HasPrefix(pointer, "/targets/") {
		return true
	}
	switch lastKey(pointer) {
	case "duty-limit", "current-limit", "saturation-current", "voltage-rating", "current-rating", "ripple-current-rating", "output-range":
		return true
	}
	return false
}

// eachBareRange visits every range of the spec that has both ends and no nominal value, in the text's order, shared ones
// included.
func (c *Case) eachBareRange(visit func(pointer string, q schema.Quantity)) {
	c.walk(c.Spec.Root, nil, visit)
}

func (c *Case) walk(node *schema.Node, steps []string, visit func(string, schema.Quantity)) {
	if node.Get("min") != nil && node.Get("max") != nil && node.Get("nominal") == nil {
		pointer := "/" + strings.Join(steps, "/")
		if q, ok := c.Spec.Quantity(pointer); ok {
			visit(pointer, q)
		}
		return
	}
	for _, entry := range node.Entries {
		c.walk(entry.Value, append(steps, entry.Key), visit)
	}
	for i, item := range node.Items {
		c.walk(item, append(steps, strconv.Itoa(i)), visit)
	}
}

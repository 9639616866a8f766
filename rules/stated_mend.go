package rules

import (
	"math"
	"strconv"

	"halfplane/analysis"
	"halfplane/schema"
)

// stateRecomputed proposes the recomputed figure in the place of the stated one, written as that was.
func stateRecomputed(c *Case, f *Finding, _ int) ([]Mend, bool) {
	if q, ok := c.Spec.Quantity(f.Pointer); ok && f.Nominal != nil {
		if at, start, end, text, ok := schema.RewriteNominal(q, fourDigits(f.Nominal.Value)); ok && at.Doc == c.Spec.Document {
			return []Mend{{
				Title: lastKey(f.Pointer) + " " + string(at.Doc.Text[start:end]) + " → " + text,
				Edits: []Edit{{Doc: at.Doc, Pointer: f.Pointer, Start: start, End: end, Text: text}},
				After: []analysis.Setting{{Path: lastKey(f.Pointer), Value: f.Nominal.Value}},
			}}, false
		}
	}
	node := c.Spec.Node(f.Pointer)
	if node == nil || f.Nominal == nil || f.Doc != c.Spec.Document {
		return nil, false
	}
	pointer := f.Pointer
	if node.Kind == schema.Mapping { // a stated figure has no spread, but may be written in the long form
		if node, pointer = node.Get("value"), pointer+"/value"; node == nil {
			return nil, false
		}
	}
	text := stateAs(node, f.Nominal.Value, f.Nominal.Unit)
	old := string(f.Doc.Text[node.Start:node.End])
	return []Mend{{
		Title: lastKey(f.Pointer) + " " + old + " → " + text,
		Edits: []Edit{{Doc: f.Doc, Pointer: pointer, Start: node.Start, End: node.End, Text: text}},
		After: []analysis.Setting{{Path: lastKey(f.Pointer), Value: f.Nominal.Value}},
	}}, false
}

// stateAs writes a figure to three significant digits in the manner of the value that it replaces: a bare number stays one,
// quotes stay.
func stateAs(node *schema.Node, value float64, unit string) string {
	source := string(node.Doc.Text[node.Start:node.End])
	quote := ""
	if len(source) > 1 && (source[0] == '"' || source[0] == '\'') {
		quote = source[:1]
	}
	if _, err := strconv.ParseFloat(node.Value, 64); err == nil || unit == "" {
		return quote + plainDigits(value) + quote
	}
	return quote + schema.Format(value, unit) + quote
}

// fourDigits rounds a value to four significant digits.
func fourDigits(v float64) float64 {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'e', 3, 64), 64)
	if err != nil {
		return v
	}
	return rounded
}

// plainDigits is a number to four significant digits without a trailing zero, which every reader takes for a number.
func plainDigits(value float64) string {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(value, 'e', 3, 64), 64)
	if err != nil {
		return strconv.FormatFloat(value, 'g', -1, 64)
	}
	if size := math.Abs(rounded); size != 0 && (size < 1e-3 || size >= 1e9) {
		return strconv.FormatFloat(rounded, 'e', -1, 64)
	}
	return strconv.FormatFloat(rounded, 'f', -1, 64)
}

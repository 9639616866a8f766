package schema

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"sort"
)

// quantityField is what the schema says about one quantity: its dimension and which values make sense.
type quantityField struct {
	dim     Dimension
	sign    string  // "positive", "nonnegative", "from-zero", "nonzero", "any"
	most    float64 // 0: no upper limit
	window  bool    // a range is a pair of limits, one of which may be left out
	scalar  bool    // one number, no spread
	because string
}

// issueKind is what is wrong at a place of a quantity.
type issueKind string

const (
	wrongAmount issueKind = "amount"  // unit, sign, order, tolerance
	wrongShape  issueKind = "shape"   // a list, a mapping, a truth value where a quantity is expected
	unknownKey  issueKind = "unknown" // at the mapping; text is the key
	missingKey  issueKind = "missing" // at the mapping; text is the key
	notUsed     issueKind = "unused"  // a key that a condition makes useless
)

// issue is one thing wrong with a quantity, at a path of keys below its field ("", "/tolerance"). Its text continues the
// name of the place.
type issue struct {
	kind issueKind
	path string
	text string
}

// read takes the value of a quantity field in all its forms: a number, a text, {value, tolerance}, {min, nominal, max}.
// The value is one of json.Number, string, bool, nil, []any and map[string]any.
func (f quantityField) read(v any) (Quantity, []issue) {
	mapping, ok := v.(map[string]any)
	switch {
	case !ok:
		q, problem := f.single(v, "")
		if problem == nil {
			problem = f.judge(q, "", writtenText(v))
		}
		return q, oneIssue(problem)
	case f.scalar:
		return Quantity{}, []issue{{wrongShape, "", f.wanted(v)}}
	}
	for _, key := range []string{"min", "nominal", "max"} {
		if _, ok := mapping[key]; ok {
			return f.readRange(mapping)
		}
	}
	if f.window {
		return Quantity{}, append(unknownKeys(mapping, "min", "nominal", "max"), issue{missingKey, "", "max"})
	}
	return f.readNominal(mapping)
}

func oneIssue(i *issue) []issue {
	if i == nil {
		return nil
	}
	return []issue{*i}
}

// single reads one scalar.
func (f quantityField) single(v any, path string) (Quantity, *issue) {
	switch v := v.(type) {
	case json.Number:
		return f.number(v, path)
	case string:
		q, bad := parseQuantity(v, f.dim)
		if bad != nil {
			return q, &issue{wrongAmount, path, bad.text}
		}
		if q.Spread && f.scalar {
			return q, &issue{wrongAmount, path, fmt.Sprintf("expects %s without tolerance, found '%s'", f.dim, shown(v))}
		}
		return q, nil
	}
	return Quantity{}, &issue{wrongShape, path, f.wanted(v)}
}

// number takes a bare number in the unit of the dimension.
func (f quantityField) number(n json.Number, path string) (Quantity, *issue) {
	v, err := n.Float64()
	if err != nil {
		return Quantity{}, &issue{wrongAmount, path, expected(f.dim, n.String(), "the number is too large").text}
	}
	return Quantity{Min: v, Nominal: v, Max: v, Unit: f.dim.Unit()}, nil
}

// wanted words that v is no scalar.
func (f quantityField) wanted(v any) string {
	return fmt.Sprintf("expects %s, such as '%s', found %s", f.dim, f.dim.facts().typed, kindOf(v))
}

// kindOf says what a value is, in words.
func kindOf(v any) string {
	switch v := v.(type) {
	case nil:
		return "nothing"
	case bool:
		return fmt.Sprintf("'%t'", v)
	case string:
		return "'" + shown(v) + "'"
	case json.Number:
		return "the number " + shown(v.String())
	case []any:
		return "a list"
	}
	return "a group of keys"
}

// writtenText is the text of a scalar for a message.
func writtenText(v any) string {
	switch v := v.(type) {
	case json.Number:
		return v.String()
	case string:
		return v
	}
	return ""
}

// readNominal reads {value, tolerance}.
func (f quantityField) readNominal(m map[string]any) (Quantity, []issue) {
	issues := unknownKeys(m, "value", "tolerance")
	value, ok := m["value"]
	if !ok {
		return Quantity{}, append(issues, issue{missingKey, "", "value"})
	}
	q, bad := f.single(value, "/value")
	if bad == nil && q.Spread {
		bad = &issue{wrongAmount, "/value", fmt.Sprintf("has a tolerance of its own, found '%s'", shown(writtenText(value)))}
	}
	if bad == nil {
		bad = f.judge(q, "/value", writtenText(value))
	}
	issues = append(issues, oneIssue(bad)...)
	tolerance, ok := m["tolerance"]
	if !ok {
		return q, issues
	}
	minus, plus, bad := readTolerance(tolerance)
	if bad != nil {
		return q, append(issues, *bad)
	}
	q, tooLarge := checkFinite(q.spreadBy(minus, plus), writtenText(value), f.dim)
	if tooLarge != nil && len(issues) == 0 {
		issues = append(issues, issue{wrongAmount, "/value", tooLarge.text})
	}
	if len(issues) == 0 {
		issues = oneIssue(f.judge(q, "/value", writtenText(value)))
	}
	return q, issues
}

// readTolerance reads the field "tolerance": a percentage or a ratio below 1.
func readTolerance(v any) (minus, plus float64, bad *issue) {
	switch v.(type) {
	case json.Number, string:
		minus, plus, f := parseTolerance(writtenText(v))
		if f != nil {
			return 0, 0, &issue{wrongAmount, "/tolerance", f.text}
		}
		return minus, plus, nil
	}
	return 0, 0, &issue{wrongShape, "/tolerance", "expects a percentage or a ratio below 1, such as '20 %', found " + kindOf(v)}
}

// readRange reads {min, nominal, max}.
func (f quantityField) readRange(m map[string]any) (Quantity, []issue) {
	issues := unknownKeys(m, "min", "nominal", "max")
	ends := map[string]float64{}
	for _, key := range []string{"min", "nominal", "max"} {
		v, ok := m[key]
		if !ok {
			if key != "nominal" && !f.window {
				issues = append(issues, issue{missingKey, "", key})
			}
			continue
		}
		q, bad := f.single(v, "/"+key)
		if bad == nil && q.Spread {
			bad = &issue{wrongAmount, "/" + key, fmt.Sprintf("has a tolerance of its own, found '%s'", shown(writtenText(v)))}
		}
		if bad == nil {
			bad = f.judgeEnd(key, q.Nominal, writtenText(v))
		}
		issues = append(issues, oneIssue(bad)...)
		ends[key] = q.Nominal
	}
	if len(issues) > 0 {
		return Quantity{}, issues
	}
	q := f.span(ends)
	bad := order(q, m)
	if bad == nil && f.sign == "nonzero" && q.Min < 0 && q.Max > 0 {
		bad = &issue{wrongAmount, "", "expects a range that does not contain zero"}
	}
	return q, oneIssue(bad)
}

// span makes a quantity of the ends that are there.
func (f quantityField) span(ends map[string]float64) Quantity {
	low, high := math.Inf(-1), math.Inf(1)
	if f.sign != "any" {
		low = 0
	}
	if f.most > 0 {
		high = f.most
	}
	q := Quantity{Min: low, Max: high, Spread: true, Unit: f.dim.Unit()}
	if v, ok := ends["min"]; ok {
		q.Min = v
	}
	if v, ok := ends["max"]; ok {
		q.Max = v
	}
	nominal, stated := ends["nominal"]
	switch {
	case stated:
		q.Nominal = nominal
	case math.IsInf(q.Min, 0):
		q.Nominal = q.Max
	case math.IsInf(q.Max, 0):
		q.Nominal = q.Min
	default:
		q.Nominal = min(max(round15(q.Min+(q.Max-q.Min)/2), q.Min), q.Max)
		q.AssumedNominal = !f.window
	}
	return q
}

// unknownKeys are the keys of m beside the known ones, in alphabetical order.
func unknownKeys(m map[string]any, known ...string) []issue {
	var issues []issue
	for key := range m {
		if !slices.Contains(known, key) {
			issues = append(issues, issue{unknownKey, "", key})
		}
	}
	sort.Slice(issues, func(i, j int) bool { return issues[i].text < issues[j].text })
	return issues
}

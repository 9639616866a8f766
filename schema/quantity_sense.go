package schema

import (
	"fmt"
	"math"
	"strings"
)

// order finds a range whose ends are the wrong way round, or whose nominal lies outside.
func order(q Quantity, m map[string]any) *issue {
	if q.Min > q.Max {
		return &issue{wrongAmount, "", fmt.Sprintf("expects min below max, found min '%s' and max '%s'", shown(writtenText(m["min"])), shown(writtenText(m["max"])))}
	}
	if q.Nominal < q.Min || q.Nominal > q.Max {
		return &issue{wrongAmount, "", fmt.Sprintf("expects nominal between min and max, found nominal '%s'", shown(writtenText(m["nominal"])))}
	}
	return nil
}

// judge tells whether the values of a scalar or of a toleranced nominal make sense in the field.
func (f quantityField) judge(q Quantity, path, text string) *issue {
	for _, v := range []float64{q.Nominal, q.Min, q.Max} {
		if bad := f.judgeValue(v, false, text); bad != "" {
			return &issue{wrongAmount, path, bad}
		}
	}
	return nil
}

// judgeEnd does the same for one end of a range.
func (f quantityField) judgeEnd(key string, v float64, text string) *issue {
	if bad := f.judgeValue(v, key == "min", text); bad != "" {
		return &issue{wrongAmount, "/" + key, bad}
	}
	return nil
}

// judgeValue says what is wrong with a value, "" if nothing is.
func (f quantityField) judgeValue(v float64, lower bool, text string) string {
	bad := ""
	switch {
	case f.dim == Count && (v < 1 || v != math.Trunc(v) || v > 1e6):
		return fmt.Sprintf("expects %s, found '%s'", f.dim, shown(text))
	case f.sign == "any":
	case f.sign == "nonzero" && v == 0:
		bad = "must not be zero"
	case f.sign == "nonzero":
	case f.sign == "nonnegative" || f.sign == "from-zero" && lower:
		if v < 0 {
			bad = "must not be negative"
		}
	case v <= 0:
		bad = "must be above zero"
	}
	if bad == "" && f.most > 0 && v > f.most {
		bad = fmt.Sprintf("must be at most %v", f.most)
		if f.dim == Ratio && v <= 100 && !strings.Contains(text, "%") {
			return fmt.Sprintf("%s, found '%s': did you mean '%s %%'?", bad, shown(text), shown(text))
		}
	}
	if bad == "" {
		return ""
	}
	if f.because != "" {
		return fmt.Sprintf("%s, found '%s': %s", bad, shown(text), f.because)
	}
	return fmt.Sprintf("%s, found '%s'", bad, shown(text))
}

package rules

import (
	"halfplane/analysis"
	"halfplane/schema"
)

// CornerWords says an assignment of a design's fields as an engineer does: input and load, then whatever is not nominal
// ("9.00 V in, 1.50 A, inductance +20 %"). It is how findings name their corners, for the figures beside them.
func CornerWords(spec *schema.Spec, design *analysis.Design, at []analysis.Setting) string {
	return (&Case{Spec: spec, Design: design}).cornerWords(at)
}

// Package interval computes with affine forms: values known only to lie in a range, together with how they depend on what they
// were computed from. Every result encloses what exact arithmetic would give for every value of its operands; rounding is
// counted outward.
//
// It has one user so far, the certificates of package analysis, and is apart from it because it must be right on its own: nothing
// here knows a converter. Start at form.go.
package interval

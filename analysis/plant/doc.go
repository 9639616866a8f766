// Package plant is the power stage: from a Circuit as a designer writes it down to its operating point, conduction mode
// and small-signal model, for every topology of the spec format.
//
// The transformer is reflected in one place (reflect.go); everything behind it lives on the output side, one equivalent
// phase. The package never knows a compensator, a file or a limit. Start at circuit.go, then solution.go.
package plant

// Package analysis is the physics of a whole design: it takes a Design (numbers with spreads), walks its corners and gives
// the figures of each and the worst of all. Everything is in SI units.
//
// It never knows a file, a position in one, a unit string or a rule. Below it: transfer (functions of s), plant (the power
// stage), network (the compensator), loop (margins). Start at design.go, then analyse.go.
package analysis

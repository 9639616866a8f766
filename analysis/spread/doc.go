// Package spread searches a box of tolerances for the point where a figure is worst: all vertices, coordinate search over the
// extremes, then over the inside, and bisection to a boundary. Everything is deterministic.
//
// It never knows what the figure is: the caller evaluates a point and says how good it is. Start at box.go.
package spread

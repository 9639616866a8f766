// Package loop measures a loop gain T(s): every crossover, phase, gain and modulus margin, closed-loop stability.
// The definitions are those of the theory sheet's section 8: T is in the magnitude convention, the critical point is −1.
// It never knows what T is made of. Start at figures.go.
package loop

// Package transfer holds transfer functions as numbers: zero–pole–gain form with delay, an optional
// sampled factor, polynomials and their roots. It is what plant and network hand to loop.
//
// It never knows what the function stands for (converter, network, loop) and never reads a file.
// Start at function.go.
package transfer

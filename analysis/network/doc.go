// Package network turns a compensator's parts into its transfer function, in the magnitude convention (the loop's
// inversion is left out). One file per family of networks. It never knows a power stage or a limit.
// Start at parts.go.
package network

// Package synthesis finds values for a compensator's parts so that the loop meets what is asked of it at every corner: the smallest
// change first (one part, then two, then the whole network), on preferred values, each candidate judged by an analysis of the design over its
// operating range and tolerances. What is asked it does not know: the caller's Judge says how far a result is from it.
//
// Start reading at problem.go; kfactor.go is the start of a whole network (Venable 1983), search.go what follows.
package synthesis

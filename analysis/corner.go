package analysis

import (
	"halfplane/analysis/loop"
	"halfplane/analysis/plant"
)

// Corner is one analysed assignment. NaN stands for a figure that does not exist; nil for a part that was not computed.
type Corner struct {
	At       []Setting // every axis of the design, in the design's order (plus what --at assigned)
	Reached  bool      // false: no duty reaches the output voltage; everything below but Ideal and DutyPeak is unset
	Plant    plant.Solution
	Loop     *loop.Figures // plain averaged loop; nil: no model (or not reached)
	Ripple   *loop.Figures // with the comparator's ripple counted (voltage mode, continuous, analogue), else nil
	Ideal    plant.Ideal   // filled for nominal, the operating corners, every corner a worst entry refers to, and --at
	DutyPeak float64       // likewise; NaN in the buck family
}

// Worst is an index into Result.Corners and the value there; Corner is −1 and Value NaN when the figure exists nowhere.
type Worst struct {
	Value  float64
	Corner int
}

// Worsts are the worst values over everything analysed.
type Worsts struct {
	PhaseMargin, GainMargin, GainReductionMargin, ModulusMargin Worst // smallest
	RHPZero                                                     Worst // lowest
	Crossover, CrossoverLow                                     Worst // highest; lowest of the (highest) crossovers
	CrossoverOverRHPZero                                        Worst // largest ratio at one and the same corner
	HighestCrossoverOverLowestRHPZero                           float64
}

// Result is what an analysis says. Corners[0] is nominal (nominal input, load and parts); then come the operating corners
// with nominal parts ({min,max} input × {min,max} load, and nominal input at full load, without repeats), Operating of
// them; then the extremes of what stores energy, the worst points of every figure, and with Options.KeepAll everything else
// that was analysed.
type Result struct {
	Corners   []Corner
	Operating int
	Worst     Worsts
	Depth     Depth  // Quick or Full
	Analysed  int    // points evaluated, kept or not
	Complete  bool   // every extreme of every tolerance that moves the loop was visited at every operating corner
	Method    string // e.g. "extreme-value, 20576 corners, refined"
}

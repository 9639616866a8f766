package analysis

import (
	"math"

	"halfplane/analysis/loop"
	"halfplane/analysis/plant"
)

// figure is one of the tracked figures. Each has a badness: the lower, the worse.
type figure int

const (
	phaseMargin figure = iota
	gainMargin
	modulusMargin
	crossoverOverZero
	highCrossover
	lowCrossover
	rhpZero
	gainReduction // of a conditionally stable loop
	manyCrossovers
	lowGain // at zero frequency

	// figures of the operating point alone
	highDuty // a point that no duty reaches is the worst
	lowDuty
	peakCurrent // of the inductor
	wideRipple  // of the inductor
	offDuty     // mc·D′ of peak current mode
	figures     // how many
)

// ofStage says whether the compensator has no part in a figure.
func (f figure) ofStage() bool { return f == rhpZero || f >= highDuty }

// badness judges a corner by the figure, NaN: it does not exist there.
func (f figure) badness(c *Corner) float64 {
	switch {
	case f.ofStage():
		return f.ofPlant(&c.Plant, c.Reached)
	case c.Loop == nil:
		return nan
	}
	return f.ofLoop(c.Loop, c.Plant.RHPZero)
}

// ofPlant is badness for the figures that the compensator has no part in.
func (f figure) ofPlant(p *plant.Solution, reached bool) float64 {
	if !reached {
		if f == highDuty {
			return -2
		}
		return nan
	}
	switch f {
	case rhpZero:
		return p.RHPZero
	case highDuty:
		return -p.Duty
	case lowDuty:
		return p.Duty
	case peakCurrent:
		return -p.InductorPeak
	case wideRipple:
		return -p.InductorRipple
	default:
		if p.Current == nil {
			return nan
		}
		return p.Current.OffDutyProduct
	}
}

// ofLoop is badness for the figures of a loop; zero is the plant's right half-plane zero, Hz.
func (f figure) ofLoop(l *loop.Figures, zero float64) float64 {
	switch f {
	case phaseMargin:
		return l.PhaseMargin
	case gainMargin:
		return l.GainMargin
	case modulusMargin:
		return l.ModulusMargin
	case crossoverOverZero:
		return -l.Crossover / zero
	case highCrossover:
		return -l.Crossover
	case lowCrossover:
		return l.Crossover
	case gainReduction:
		return l.GainReductionMargin
	case manyCrossovers:
		return -float64(len(l.Crossovers))
	default:
		return l.DCGain
	}
}

// worsts finds the worst values of all corners; the first of those that are equal but for rounding counts.
func worsts(corners []Corner) Worsts {
	w := Worsts{
		PhaseMargin: nowhere, GainMargin: nowhere, GainReductionMargin: nowhere, ModulusMargin: nowhere, RHPZero: nowhere,
		Crossover: nowhere, CrossoverLow: nowhere, CrossoverOverRHPZero: nowhere,
	}
	for i := range corners {
		c := &corners[i]
		if c.Reached && c.Plant.HasModel {
			w.RHPZero.least(i, c.Plant.RHPZero)
		}
		if c.Loop == nil {
			continue
		}
		w.PhaseMargin.least(i, c.Loop.PhaseMargin)
		w.GainMargin.least(i, c.Loop.GainMargin)
		w.GainReductionMargin.least(i, c.Loop.GainReductionMargin)
		w.ModulusMargin.least(i, c.Loop.ModulusMargin)
		w.CrossoverLow.least(i, c.Loop.Crossover)
		w.Crossover.greatest(i, c.Loop.Crossover)
		w.CrossoverOverRHPZero.greatest(i, c.Loop.Crossover/c.Plant.RHPZero)
	}
	w.HighestCrossoverOverLowestRHPZero = w.Crossover.Value / w.RHPZero.Value
	return w
}

var nowhere = Worst{Value: nan, Corner: -1}

func (w *Worst) least(corner int, value float64) {
	if value < w.Value-1e-10*math.Abs(w.Value) || w.Corner < 0 && value == value { // NaN differs from itself
		*w = Worst{value, corner}
	}
}

func (w *Worst) greatest(corner int, value float64) {
	if value > w.Value+1e-10*math.Abs(w.Value) || w.Corner < 0 && value == value {
		*w = Worst{value, corner}
	}
}

// each visits the entries that refer to a corner and says whether they are margins.
func (w *Worsts) each(visit func(w *Worst, margin bool)) {
	for i, e := range []*Worst{&w.PhaseMargin, &w.GainMargin, &w.GainReductionMargin, &w.ModulusMargin, &w.RHPZero, &w.Crossover,
		&w.CrossoverLow, &w.CrossoverOverRHPZero} {
		if e.Corner >= 0 {
			visit(e, i < 4)
		}
	}
}

package analysis

import (
	"errors"
	"math"
	"math/cmplx"

	"halfplane/analysis/loop"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/transfer"
)

// worseEnd is the end of an axis at which a figure is worse to first order, when it changes by change from the axis's min to its
// max; the value now where nothing changes.
func worseEnd(p *plan, axis int, change, now float64) float64 {
	switch {
	case change < 0:
		return p.box.Max[axis]
	case change > 0:
		return p.box.Min[axis]
	}
	return now
}

// changesAt gives for each of the axes the first-order change of the figure's badness at x (radians, nepers; up to a positive
// factor for the others) when the axis runs from its min to its max; figures are those of x. nil where there is no loop.
func (s *search) changesAt(f figure, x []float64, figures *loop.Figures, axes []int) []float64 {
	w := s.worker
	if f.ofStage() {
		return s.stageChanges(f, x, axes)
	}
	if figures == nil {
		return nil
	}
	omega := 2 * math.Pi * f.frequency(figures)
	if !(omega > 0) {
		return nil
	}
	w.set(x)
	if !w.hasLoop() {
		return nil
	}
	t := w.gain.At(omega)
	l, err := w.meter.LogSlope(&w.gain, omega)
	if err != nil {
		return nil
	}
	list := make([]float64, len(axes))
	for i, axis := range axes {
		var delta complex128
		var zero float64 // change of ln of the right half-plane zero
		if w.circuit[axis] {
			delta, zero = s.stageChange(x, axis, omega)
		} else {
			delta = w.networkChange(s.plan, axis, omega)
		}
		list[i] = f.change(figures, t, l, delta, zero)
	}
	return list
}

// frequency is where the figure is decided, Hz; NaN: nowhere.
func (f figure) frequency(l *loop.Figures) float64 {
	switch f {
	case phaseMargin:
		return l.PhaseMarginFrequency
	case gainMargin:
		return l.GainMarginFrequency
	case modulusMargin:
		return l.ModulusFrequency
	case crossoverOverZero, highCrossover, lowCrossover:
		return l.Crossover
	default:
		return nan // no frequency of the loop decides it
	}
}

// change is the first-order change of the figure's badness (up to a positive factor) when ln T changes by delta.
func (f figure) change(figures *loop.Figures, t, l, delta complex128, zero float64) float64 {
	crossover := -real(delta) / real(l)
	switch f {
	case phaseMargin:
		m := math.Atan2(-imag(t), -real(t))
		change := math.Copysign(1, m) * (imag(delta) + imag(l)*crossover)
		if !figures.Stable {
			change = -change
		}
		return change
	case gainMargin:
		change := -(real(delta) - real(l)*imag(delta)/imag(l))
		if !figures.Stable && cmplx.Abs(t) < 1 {
			change = -change
		}
		return change
	case modulusMargin:
		return real(cmplx.Conj(1+t)*t*delta) / cmplx.Abs(1+t)
	case crossoverOverZero:
		return zero - crossover
	case highCrossover:
		return -crossover
	default:
		return crossover
	}
}

// networkChange is ln C(max) − ln C(min) at omega for one axis of the compensator, the others nominal.
func (w *worker) networkChange(p *plan, axis int, omega float64) complex128 {
	if w.extremes == nil {
		w.buildExtremes(p)
	}
	pair := &w.extremes[axis]
	return logRatio(pair[1].At(omega), pair[0].At(omega))
}

// buildExtremes builds the compensator at both ends of each of its axes, the others nominal, once for a worker.
func (w *worker) buildExtremes(p *plan) {
	w.extremes = make([][2]transfer.Product, len(p.nominal))
	point := w.design.Nominal.clone()
	for _, axis := range p.tolerant {
		if w.circuit[axis] {
			continue
		}
		field := Field(&point, w.design.Axes[axis].Path)
		before := *field
		for side, v := range [2]float64{p.box.Min[axis], p.box.Max[axis]} {
			*field = v
			if err := network.Build(&point.Network, &w.extremes[axis][side]); err != nil {
				w.extremes[axis][side] = transfer.Product{Function: transfer.Function{Gain: nan}}
			}
		}
		*field = before
	}
}

// stageChanges gives the changes of a figure that the compensator has no part in, by looking at both ends of each axis.
func (s *search) stageChanges(f figure, x []float64, axes []int) []float64 {
	p, w := s.plan, s.worker
	list := make([]float64, len(axes))
	for i, axis := range axes {
		if !w.circuit[axis] {
			continue
		}
		before := x[axis]
		var ends [2]float64
		for side, v := range [2]float64{p.box.Min[axis], p.box.Max[axis]} {
			x[axis] = v
			w.set(x)
			ends[side] = nan
			if reached := !errors.Is(w.solveErr, plant.ErrUnreachable); w.solveErr == nil || !reached {
				ends[side] = f.ofPlant(&w.solution, reached)
			}
		}
		x[axis] = before
		list[i] = ends[1] - ends[0]
	}
	return list
}

// stageChange is the same for an axis of the power stage or the modulator, around x; also the change of ln of the right
// half-plane zero. NaN where an extreme has no model.
func (s *search) stageChange(x []float64, axis int, omega float64) (delta complex128, zero float64) {
	w, before := s.worker, x[axis]
	defer func() { x[axis] = before }()
	var gain [2]complex128
	var zeros [2]float64
	for side, v := range [2]float64{s.plan.box.Min[axis], s.plan.box.Max[axis]} {
		x[axis] = v
		w.set(x)
		if !w.hasLoop() {
			return complex(nan, nan), nan
		}
		gain[side], zeros[side] = w.gain.At(omega), w.solution.RHPZero
	}
	return logRatio(gain[1], gain[0]), math.Log(zeros[1] / zeros[0])
}

// logRatio is ln(a/b).
func logRatio(a, b complex128) complex128 {
	r := a / b
	return complex(math.Log(cmplx.Abs(r)), cmplx.Phase(r))
}

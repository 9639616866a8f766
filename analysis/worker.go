package analysis

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"halfplane/analysis/loop"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/transfer"
)

// worker evaluates points of one design. It owns a copy of the design's point and all scratch storage, and keeps what did not
// change since the last point: the plant while only the compensator moves, the network while only the plant does.
type worker struct {
	design  *Design
	point   Point
	fields  []*float64 // of point, one for each axis
	circuit []bool     // the axis belongs to the power stage or the modulator

	have               bool // solution and compensator hold for the values now in point
	complete           bool // the next solution is to be of a point that is shown
	shown              bool // solution holds what only a point that is shown needs
	solveErr, buildErr error
	solution           plant.Solution
	kept               *plant.Solution // solution with slices of its own, once a corner needed them
	compensator        transfer.Product
	gain               transfer.Product
	figures            loop.Figures
	meter              loop.Meter
	extremes           [][2]transfer.Product // the compensator at both ends of each of its axes
}

func newWorker(d *Design) (*worker, error) {
	w := &worker{design: d, point: d.Nominal.clone()}
	for _, axis := range d.Axes {
		field := Field(&w.point, axis.Path)
		if field == nil {
			return nil, fmt.Errorf("reading the design: %q is no field of it", axis.Path)
		}
		w.fields = append(w.fields, field)
		w.circuit = append(w.circuit, belongsToCircuit(axis.Path))
	}
	return w, nil
}

// set moves the worker's point to x (one value for each axis) and solves what that changes.
func (w *worker) set(x []float64) {
	stage, net := !w.have, !w.have
	for i, v := range x {
		if *w.fields[i] != v {
			*w.fields[i] = v
			if w.circuit[i] {
				stage = true
			} else {
				net = true
			}
		}
	}
	w.solve(stage, net)
}

func (w *worker) solve(stage, net bool) {
	w.have = true
	if stage {
		w.kept, w.shown = nil, false
		if w.complete {
			w.show()
		} else {
			w.solveErr = plant.SolveLoop(&w.point.Circuit, &w.solution)
		}
	}
	if net {
		w.buildErr = network.Build(&w.point.Network, &w.compensator)
	}
}

// hasLoop forms the loop gain where there is one.
func (w *worker) hasLoop() bool {
	if w.solveErr != nil || w.buildErr != nil || !w.solution.HasModel {
		return false
	}
	assemble(&w.gain, &w.compensator, &w.solution, w.point.Circuit.Modulator.Delay)
	return true
}

// corner evaluates the point that was set. The error is a number outside a model's domain; the corner then still holds what
// could be computed. An output voltage that no duty reaches is a result, not an error.
func (w *worker) corner() (Corner, error) {
	w.show()
	c := Corner{Reached: !errors.Is(w.solveErr, plant.ErrUnreachable), DutyPeak: nan}
	c.Plant = *w.keep()
	c.Ideal = noIdeal
	if !c.Reached {
		return c, w.buildErr
	}
	if w.solveErr != nil {
		return c, w.solveErr
	}
	if !w.hasLoop() {
		return c, w.buildErr
	}
	if err := w.meter.Measure(&w.gain, w.solution.FilterFrequency, &w.figures); err != nil {
		return c, err
	}
	f := w.figures
	f.Crossovers = slices.Clone(f.Crossovers)
	c.Loop = &f
	return c, nil
}

// mode is the conduction mode at x, without solving anything else.
func (w *worker) mode(x []float64) plant.Mode {
	for i, v := range x {
		*w.fields[i] = v
	}
	w.have = false
	return plant.ModeOf(&w.point.Circuit)
}

// show completes the solution of the point that was set.
func (w *worker) show() {
	if !w.shown {
		w.solveErr = plant.Solve(&w.point.Circuit, &w.solution)
		w.shown = true
	}
}

// setShown is set for a point that will be shown: its power stage is solved once, with everything.
func (w *worker) setShown(x []float64) {
	w.complete = true
	w.set(x)
	w.complete = false
	w.show()
}

// keep gives the solution with slices that later points leave alone.
func (w *worker) keep() *plant.Solution {
	if w.kept == nil {
		s := w.solution
		s.Control.Zeros, s.Control.Poles = slices.Clone(s.Control.Zeros), slices.Clone(s.Control.Poles)
		w.kept = &s
	}
	return w.kept
}

// settings lists the values of every axis, in the design's order.
func (w *worker) settings() []Setting {
	at := make([]Setting, len(w.fields))
	for i, field := range w.fields {
		at[i] = Setting{Path: w.design.Axes[i].Path, Value: *field}
	}
	return at
}

// explain adds what only some corners carry: closed forms, the duty of the peak, and the figures with the comparator's ripple
// where they are asked for.
func (w *worker) explain(c *Corner, ripple bool) {
	c.Ideal = plant.IdealOf(&w.point.Circuit)
	c.DutyPeak = plant.DutyPeak(&w.point.Circuit)
	if ripple && c.Loop != nil && c.Ripple == nil {
		c.Ripple = w.ripple()
	}
}

// ripple measures the loop with the output ripple at the comparator counted (theory sheet section 11): voltage mode, continuous
// conduction, analogue networks. nil where it does not apply.
func (w *worker) ripple() *loop.Figures {
	if w.point.Circuit.Modulator.Scheme != plant.VoltageMode || w.solution.Mode != plant.Continuous || w.point.Network.Kind == network.Digital {
		return nil
	}
	control, _, ok := plant.WithRipple(&w.point.Circuit, &w.solution, func(s complex128) complex128 { return w.compensator.At(imag(s)) })
	if !ok {
		return nil
	}
	with := w.solution
	with.Control = control
	var t transfer.Product
	assemble(&t, &w.compensator, &with, w.point.Circuit.Modulator.Delay)
	f := new(loop.Figures)
	if err := w.meter.Measure(&t, w.solution.FilterFrequency, f); err != nil {
		return nil
	}
	return f
}

// belongsToCircuit says whether a field belongs to the power stage or its modulator.
func belongsToCircuit(path string) bool { return !strings.HasPrefix(path, "compensator.") }

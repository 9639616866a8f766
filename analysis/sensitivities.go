package analysis

import (
	"cmp"
	"context"
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"halfplane/analysis/loop"
)

// Effect is what one part does to a figure of the loop around one point.
type Effect struct {
	Path       string  // of the part
	PerPercent float64 // change of the figure for 1 % more of the part, in the figure's own unit
	OverSpread float64 // change from the part's min to its max, the others as at the point; NaN: it has no spread
}

// Sensitivities are the effects of all parts on the worst figures, each at its own worst corner, the largest per cent first. The unit is
// degrees for the phase margin, decibels for the gain margin, per cent for the (highest) crossover. nil: that figure exists nowhere.
type Sensitivities struct{ PhaseMargin, GainMargin, Crossover []Effect }

// SensitivitiesOf finds the effects on the worst figures of an analysis. Errors: ctx ended.
func SensitivitiesOf(ctx context.Context, d *Design, r *Result) (*Sensitivities, error) {
	s := &Sensitivities{}
	for _, part := range []struct {
		out   *[]Effect
		worst Worst
		of    func(*loop.Figures) float64
	}{
		{&s.PhaseMargin, r.Worst.PhaseMargin, PhaseMarginOf},
		{&s.GainMargin, r.Worst.GainMargin, GainMarginOf},
		{&s.Crossover, r.Worst.Crossover, CrossoverOf},
	} {
		if part.worst.Corner < 0 {
			continue
		}
		effects, err := Effects(ctx, d, r.Corners[part.worst.Corner].At, part.of, true)
		if err != nil {
			return nil, fmt.Errorf("finding sensitivities: %w", err)
		}
		*part.out = effects
	}
	for i := range s.Crossover { // hertz to per cent of the crossover
		s.Crossover[i].PerPercent *= 100 / r.Worst.Crossover.Value
		s.Crossover[i].OverSpread *= 100 / r.Worst.Crossover.Value
	}
	return s, nil
}

// PhaseMarginOf, GainMarginOf and CrossoverOf read figures for Effects: degrees, decibels, hertz.
func PhaseMarginOf(l *loop.Figures) float64 { return l.PhaseMargin }
func GainMarginOf(l *loop.Figures) float64  { return l.GainMargin }
func CrossoverOf(l *loop.Figures) float64   { return l.Crossover }

// Effects finds what each part of the design does to a figure around the assignment at, the largest per cent first. A part is every value
// of the power stage, the modulator or the compensator that is a quantity and not a condition of operation; parts without a spread
// that do nothing are left out. spread asks for OverSpread too, else it is NaN. Differences are central, of a ten-thousandth of the
// part either way; beside a change of the conduction mode they are taken on the point's own side. Errors: ctx ended, or a path
// that is no field.
func Effects(ctx context.Context, d *Design, at []Setting, figure func(*loop.Figures) float64, spread bool) ([]Effect, error) {
	w, err := newWorker(d)
	if err != nil {
		return nil, err
	}
	for _, s := range at {
		field := Field(&w.point, s.Path)
		if field == nil {
			return nil, fmt.Errorf("this design has no field %q", s.Path)
		}
		*field = s.Value
	}
	e := effects{ctx: ctx, worker: w, figure: figure}
	e.middle, e.mode = e.value(nil, 0)
	var list []Effect
	for _, path := range partsOf(d) {
		field := Field(&w.point, path)
		effect := Effect{Path: path, PerPercent: e.perPercent(field), OverSpread: nan}
		wide := false
		for _, a := range d.Axes {
			if a.Path == path && a.Min < a.Max {
				wide = true
				if spread {
					high, _ := e.value(field, a.Max)
					low, _ := e.value(field, a.Min)
					effect.OverSpread = high - low
				}
			}
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if wide && !math.IsNaN(effect.PerPercent) || math.Abs(effect.PerPercent) > 1e-6*math.Abs(e.middle) {
			list = append(list, effect)
		}
	}
	slices.SortStableFunc(list, func(a, b Effect) int {
		return cmp.Or(cmp.Compare(math.Abs(b.PerPercent), math.Abs(a.PerPercent)), cmp.Compare(a.Path, b.Path))
	})
	return list, nil
}

// effects evaluates a figure around one point.
type effects struct {
	ctx    context.Context
	worker *worker
	figure func(*loop.Figures) float64
	middle float64
	mode   int
}

// value is the figure with one field changed, and the conduction mode; NaN where it does not exist. The field is put back.
func (e *effects) value(field *float64, v float64) (float64, int) {
	w := e.worker
	if field != nil {
		before := *field
		*field = v
		defer func() { *field = before }()
	}
	w.solve(true, true)
	if e.ctx.Err() != nil || !w.hasLoop() || w.meter.Measure(&w.gain, w.solution.FilterFrequency, &w.figures) != nil {
		return nan, 0
	}
	return e.figure(&w.figures), int(w.solution.Mode)
}

func (e *effects) perPercent(field *float64) float64 {
	const step = 1e-4
	v := *field
	high, above := e.value(field, v*(1+step))
	low, below := e.value(field, v*(1-step))
	switch {
	case above == e.mode && below == e.mode:
		return (high - low) / (2 * step) * 0.01
	case above == e.mode:
		return (high - e.middle) / step * 0.01
	case below == e.mode:
		return (e.middle - low) / step * 0.01
	}
	return nan
}

// partsOf lists the paths of a design's parts, those of the power stage first.
func partsOf(d *Design) []string {
	p := d.Nominal.clone()
	var list []string
	for _, path := range slices.Sorted(maps.Keys(fields)) {
		if isPart(path) {
			list = append(list, path)
		}
	}
	bank := func(i int) string { return fmt.Sprintf("output-capacitors.%d.", i) }
	if len(p.Circuit.Banks) == 1 && !slices.ContainsFunc(d.Axes, func(a Axis) bool { return strings.HasPrefix(a.Path, "output-capacitors.") }) {
		bank = func(int) string { return "output-capacitor." }
	}
	for i := range p.Circuit.Banks {
		list = append(list, bank(i)+"capacitance", bank(i)+"esr")
	}
	for name, roots := range map[string]int{"zeros": len(p.Network.Zeros), "poles": len(p.Network.Poles)} {
		for i := range roots {
			list = append(list, fmt.Sprintf("compensator.%s.%d.frequency", name, i), fmt.Sprintf("compensator.%s.%d.quality", name, i))
		}
	}
	for _, a := range d.Axes { // a path written another way
		if isPart(a.Path) && !slices.ContainsFunc(list, func(path string) bool { return Field(&p, path) == Field(&p, a.Path) }) {
			list = append(list, a.Path)
		}
	}
	list = slices.DeleteFunc(list, func(path string) bool {
		v := *Field(&p, path)
		return v == 0 || path == "modulator.control-ratio" && v == 1 && !slices.ContainsFunc(d.Axes, func(a Axis) bool { return a.Path == path })
	}) // what is left out has no part; neither has a control ratio of one
	slices.SortStableFunc(list, func(a, b string) int {
		return cmp.Compare(boolAsInt(!belongsToCircuit(a)), boolAsInt(!belongsToCircuit(b)))
	})
	for i, path := range list { // an axis's own way of writing it
		for _, a := range d.Axes {
			if Field(&p, a.Path) == Field(&p, path) {
				list[i] = a.Path
			}
		}
	}
	return list
}

func boolAsInt(b bool) int {
	if b {
		return 1
	}
	return 0
}

// isPart says whether a field is a property of a part, not a condition of operation, a frequency that is set, or a count.
func isPart(path string) bool {
	switch path {
	case "input-voltage", "output-voltage", "load.current", "switching-frequency", "compensator.sampling-frequency",
		"turns.primary", "turns.secondary", "coupling-capacitor.count":
		return false
	}
	for _, listed := range []string{"compensator.numerator.", "compensator.denominator."} {
		if strings.HasPrefix(path, listed) {
			return false
		}
	}
	return !strings.Contains(path, "bias-derating") && !strings.HasSuffix(path, ".count")
}

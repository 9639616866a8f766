package workspace

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/analysis/loop"
	"halfplane/schema"
)

// The adversary of the worst-case search: a wide random search with refinement that shares nothing with it but the evaluation of a point
// (analysis.LoopGain and loop.Meter, which are checked against independent figures). Whatever it finds, the analysis has to find
// within 0.2° and 0.1 dB.
//
// HALFPLANE_WIDE=FOLDER adds the designs of a folder (random_designs.py --keep writes some) and HALFPLANE_POINTS sets the points for each.

// explorer evaluates points of one design.
type explorer struct {
	axes   []analysis.Axis
	point  analysis.Point
	fields []*float64
	meter  loop.Meter
	best   map[string]sighting
}

type sighting struct {
	value float64
	x     []float64
}

func explore(d *analysis.Design) *explorer {
	e := &explorer{point: d.Nominal, best: map[string]sighting{}}
	c, n := &e.point.Circuit, &e.point.Network
	c.Banks = slices.Clone(c.Banks)
	n.Zeros, n.Poles, n.Numerator, n.Denominator = slices.Clone(n.Zeros), slices.Clone(n.Poles), slices.Clone(n.Numerator), slices.Clone(n.Denominator)
	for _, a := range d.Axes {
		e.axes = append(e.axes, a)
		e.fields = append(e.fields, analysis.Field(&e.point, a.Path))
	}
	return e
}

// at gives the figures of a point, lowest is worst; NaN: none.
func (e *explorer) at(x []float64) (phase, gain float64) {
	for i, f := range e.fields {
		*f = x[i]
	}
	t, err := analysis.LoopGain(&e.point)
	if err != nil {
		return math.NaN(), math.NaN()
	}
	var l loop.Figures
	fs := e.point.Circuit.SwitchingFrequency * e.point.Circuit.Topology.FilterMultiple()
	if e.meter.Measure(&t, fs, &l) != nil {
		return math.NaN(), math.NaN()
	}
	e.keep("phase", l.PhaseMargin, x)
	e.keep("gain", l.GainMargin, x)
	return l.PhaseMargin, l.GainMargin
}

func (e *explorer) keep(name string, v float64, x []float64) {
	if have, ok := e.best[name]; !math.IsNaN(v) && (!ok || v < have.value) {
		e.best[name] = sighting{v, slices.Clone(x)}
	}
}

// random is a point: each axis at an end, anywhere, or anywhere by ratio.
func (e *explorer) random(r *rand.Rand) []float64 {
	x := make([]float64, len(e.axes))
	ends := r.Float64()
	for i, a := range e.axes {
		u := r.Float64()
		switch {
		case r.Float64() < ends:
			x[i] = a.Min
			if u < 0.5 {
				x[i] = a.Max
			}
		case a.Min > 0 && r.IntN(2) == 0:
			x[i] = a.Min * math.Pow(a.Max/a.Min, u)
		default:
			x[i] = a.Min + u*(a.Max-a.Min)
		}
	}
	return x
}

// refine goes on from a point by random steps that shrink, for one figure.
func (e *explorer) refine(r *rand.Rand, name string, start sighting, steps int) {
	value := func(x []float64) float64 {
		p, g := e.at(x)
		if name == "gain" {
			return g
		}
		return p
	}
	best := start
	for k := range steps {
		size := 0.4 * math.Pow(1e-4, float64(k)/float64(steps))
		x := slices.Clone(best.x)
		for i, a := range e.axes {
			if r.IntN(3) == 0 {
				x[i] = math.Min(math.Max(x[i]+size*r.NormFloat64()*(a.Max-a.Min), a.Min), a.Max)
			}
		}
		if v := value(x); v < best.value {
			best = sighting{v, x}
		}
	}
}

// widest searches one design.
func widest(d *analysis.Design, points int, seed uint64) map[string]sighting {
	r := rand.New(rand.NewPCG(seed, 11))
	e := explore(d)
	pool := map[string][]sighting{}
	for range points {
		x := e.random(r)
		p, g := e.at(x)
		if !math.IsNaN(p) {
			pool["phase"] = append(pool["phase"], sighting{p, x})
		}
		if !math.IsNaN(g) {
			pool["gain"] = append(pool["gain"], sighting{g, x})
		}
	}
	for name, list := range pool {
		slices.SortFunc(list, func(a, b sighting) int {
			if a.value < b.value {
				return -1
			}
			return 1
		})
		for i := range min(6, len(list)) {
			e.refine(r, name, list[i], points/30)
		}
	}
	return e.best
}

// designs are the reference designs, the demonstration shelf, and what HALFPLANE_WIDE names.
func wideDesigns(t *testing.T) map[string]*analysis.Design {
	t.Helper()
	var paths []string
	for _, pattern := range []string{"../testdata/reference/*.converter.yaml", "../cmd/halfplane/shelf/*.converter.yaml"} {
		list, err := filepath.Glob(pattern)
		require.NoError(t, err)
		paths = append(paths, list...)
	}
	if folder := os.Getenv("HALFPLANE_WIDE"); folder != "" {
		list, err := Search([]string{folder})
		require.NoError(t, err)
		paths = append(paths, list...)
	}
	designs := map[string]*analysis.Design{}
	for _, path := range paths {
		text, err := os.ReadFile(path)
		require.NoError(t, err)
		w := Open(filepath.Dir(path))
		spec, problems := schema.Validate(schema.Read(path, text, 0), w)
		if spec != nil && len(problems) == 0 {
			designs[strings.TrimSuffix(path, ".converter.yaml")] = spec.Design()
		}
	}
	return designs
}

func TestNoWideSearchFindsAWorseMargin(t *testing.T) {
	points := 400
	if s := os.Getenv("HALFPLANE_POINTS"); s != "" {
		_, err := fmt.Sscan(s, &points)
		require.NoError(t, err)
	}
	near, all := 0, 0
	for name, d := range wideDesigns(t) {
		full, err := analysis.Analyse(context.Background(), d, analysis.Options{})
		if err != nil {
			continue // numbers outside the models
		}
		quick, err := analysis.Analyse(context.Background(), d, analysis.Options{Depth: analysis.Quick})
		require.NoError(t, err)
		all++
		if w := full.Worst.PhaseMargin; w.Corner < 0 || quick.Worst.PhaseMargin.Value-w.Value <= 1 {
			near++
		} else {
			t.Logf("quick %.2f° full %.2f°  %s", quick.Worst.PhaseMargin.Value, w.Value, name)
		}
		wide := widest(d, points, 5)
		for _, c := range []struct {
			name    string
			ours    analysis.Worst
			allowed float64
		}{{"phase", full.Worst.PhaseMargin, 0.2}, {"gain", full.Worst.GainMargin, 0.1}} {
			w, ok := wide[c.name]
			if !ok {
				continue
			}
			if c.ours.Value < -20 && c.name == "gain" {
				continue // where a pole of the plant itself crosses the axis the gain at a phase crossover has no bound
			}
			if c.ours.Corner < 0 || c.ours.Value > w.value+c.allowed {
				t.Errorf("%s: %s margin %.3f, a wide search finds %.3f\n  ours %v\n  wide %v", name, c.name, c.ours.Value, w.value, at(full, c.ours), w.x)
			}
		}
	}
	t.Logf("quick is within 1° of full on %d of %d designs", near, all)
	require.GreaterOrEqual(t, float64(near), 0.9*float64(all), "quick within 1° of full")
}

func at(r *analysis.Result, w analysis.Worst) []float64 {
	if w.Corner < 0 {
		return nil
	}
	var x []float64
	for _, s := range r.Corners[w.Corner].At {
		x = append(x, s.Value)
	}
	return x
}

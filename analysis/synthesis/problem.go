package synthesis

import (
	"context"
	"math"
	"slices"
	"strconv"
	"strings"

	"halfplane/analysis"
)

// Part is a field whose value may be chosen.
type Part struct {
	Path   string            // of the spec format, "compensator.feedback-resistor"
	Series []analysis.Series // preferred values; nil: any, to two significant digits
	Low    float64           // bounds, > 0
	High   float64
}

// Problem is a design with the parts that may change.
type Problem struct {
	Design *analysis.Design
	Parts  []Part
	// Judge says how far a result is from what is asked, 0 where everything is met. The result is of quick depth.
	Judge func(*analysis.Design, *analysis.Result) float64
	Jobs  int

	known map[string]Outcome
	whole *whole // what All found
}

type whole struct {
	answer Answer
	ok     bool
}

// Outcome is what became of one choice of values.
type Outcome struct {
	Violation float64 // 0: everything is met; +Inf: nothing can be computed
	Crossover float64 // Hz, the lowest of the corners' highest crossovers: how fast the loop is at its slowest; 0: none
}

// Answer is a choice of values that meets everything.
type Answer struct {
	Changes []analysis.Setting // nominal values, of the parts that change
	Outcome
}

// Numerator is the path of all coefficients of a digital compensator's numerator together; its value is a factor, 1 as it is.
const Numerator = "compensator.numerator"

// mostTried bounds how many choices one problem analyses: a few seconds for a stage with one inductor, half a minute for one with two.
const mostTried = 3000

// With is a design with other nominal values: the spread of a field keeps its proportion to nominal.
func With(d *analysis.Design, changes []analysis.Setting) *analysis.Design {
	out := *d
	out.Nominal.Network.Zeros = slices.Clone(d.Nominal.Network.Zeros)
	out.Nominal.Network.Poles = slices.Clone(d.Nominal.Network.Poles)
	out.Nominal.Network.Numerator = slices.Clone(d.Nominal.Network.Numerator)
	out.Nominal.Network.Denominator = slices.Clone(d.Nominal.Network.Denominator)
	out.Nominal.Circuit.Banks = slices.Clone(d.Nominal.Circuit.Banks)
	out.Axes = slices.Clone(d.Axes)
	for _, s := range changes {
		if s.Path == Numerator {
			for i := range out.Nominal.Network.Numerator {
				out.Nominal.Network.Numerator[i] *= s.Value
			}
			continue
		}
		if at := analysis.Field(&out.Nominal, s.Path); at != nil {
			*at = s.Value
		}
		for i := range out.Axes {
			if a := &out.Axes[i]; a.Path == s.Path {
				by := s.Value / a.Nominal
				*a = analysis.Axis{Path: a.Path, Min: a.Min * by, Nominal: s.Value, Max: a.Max * by}
			}
		}
	}
	return &out
}

// valueOf is a part's nominal value in the design as it is.
func (p *Problem) valueOf(part Part) float64 {
	if part.Path == Numerator {
		return 1
	}
	point := p.Design.Nominal
	if at := analysis.Field(&point, part.Path); at != nil {
		return *at
	}
	return math.NaN()
}

// try analyses the design with some values changed, once for each choice.
func (p *Problem) try(ctx context.Context, changes []analysis.Setting) Outcome {
	var key strings.Builder
	for _, s := range changes {
		key.WriteString(s.Path + "=" + strconv.FormatFloat(s.Value, 'g', 9, 64) + " ")
	}
	if out, tried := p.known[key.String()]; tried {
		return out
	}
	if len(p.known) >= mostTried {
		return Outcome{Violation: math.Inf(1)}
	}
	out := p.analysed(ctx, With(p.Design, changes))
	if p.known == nil {
		p.known = map[string]Outcome{}
	}
	p.known[key.String()] = out
	return out
}

func (p *Problem) analysed(ctx context.Context, d *analysis.Design) Outcome {
	r, err := analysis.Analyse(ctx, d, analysis.Options{Depth: analysis.Quick, Jobs: p.Jobs})
	if err != nil {
		return Outcome{Violation: math.Inf(1)}
	}
	out := Outcome{Violation: p.Judge(d, r), Crossover: r.Worst.CrossoverLow.Value}
	if math.IsNaN(out.Violation) {
		out.Violation = math.Inf(1)
	}
	if math.IsNaN(out.Crossover) {
		out.Crossover = 0
	}
	return out
}

// near is the values of a part that are made, within its bounds, the nearest (by ratio) to a value first.
func (p Part) near(value float64, most int) []float64 {
	value = math.Min(math.Max(value, p.Low), p.High)
	var out []float64
	if p.Series == nil {
		rounded, _ := strconv.ParseFloat(strconv.FormatFloat(value, 'e', 1, 64), 64)
		out = []float64{rounded}
		return out
	}
	add := func(v float64) {
		if v >= p.Low && v <= p.High && !slices.Contains(out, v) {
			out = append(out, v)
		}
	}
	below, above := analysis.Preferred(value, p.Series...)
	for range most {
		add(below)
		add(above)
		below, _ = analysis.Preferred(below*(1-1e-5), p.Series...)
		_, above = analysis.Preferred(above*(1+1e-5), p.Series...)
	}
	slices.SortStableFunc(out, func(a, b float64) int {
		x, y := math.Abs(math.Log(a/value)), math.Abs(math.Log(b/value))
		switch {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return 0
	})
	return out[:min(most, len(out))]
}

package plant

import (
	"math"
	"math/cmplx"
	"slices"
)

// filterStudy evaluates the two ratios that say how much an input filter disturbs the converter (R. D. Middlebrook, "Input filter considerations
// in design and application of switching regulators", IEEE IAS 1976; theory sheet section 9):
//
//	Zo = (rf + s Lf) ∥ (ef + 1/(s Cf)) ∥ (Rd + 1/(s Cd))
//	1/ZD = ig/vg with the control held (the duty; in peak current mode the control voltage, the current loop closed inside)
//	1/ZN = ig/vg − (ig/d)(vo/vg)/(vo/d)
//
// The converter is the bare stage, fed with the voltage at its own terminal.
type filterStudy struct {
	stage *Stage
	m     *linear
	a     square
	law   loopTerms // how the duty answers inside; gain 0: not at all
	ahead float64   // feed-forward: duty per volt of the terminal, counted falling
}

// filterRatios fills Input in continuous conduction.
func (s *Stage) filterRatios(c *Circuit, x *steady, out *Solution) error {
	f := s.filterStudy(c, x, out)
	return f.fill(out)
}

// filterStudy prepares the study of a stage in continuous conduction.
func (s *Stage) filterStudy(c *Circuit, x *steady, out *Solution) filterStudy {
	f := s.studyOf(s.without(x.terminal).average(x))
	if c.Modulator.Scheme == PeakCurrentMode {
		f.law = s.loopTerms(x, out.Current)
	} else if c.Modulator.FeedForward {
		f.ahead = x.duty / x.terminal
	}
	return f
}

// filterRatiosOfPulse fills Input in discontinuous conduction.
func (s *Stage) filterRatiosOfPulse(c *Circuit, p pulse, out *Solution) error {
	f := s.studyOf(s.without(p.terminal).averagePulse(p))
	if c.Modulator.Scheme == PeakCurrentMode {
		f.law = s.pulseTerms(p, out.Current)
	} else if c.Modulator.FeedForward {
		f.ahead = p.duty / p.terminal
	}
	return f.fill(out)
}

// without is the stage without its input filter, fed with the terminal voltage.
func (s *Stage) without(terminal float64) *Stage {
	bare := *s
	bare.HasFilter, bare.Input = false, terminal
	return &bare
}

// studyOf starts the study of a stage from the linear model of its bare self.
func (s *Stage) studyOf(m *linear) filterStudy { return filterStudy{stage: s, m: m, a: m.states()} }

// fill finds the largest ratios up to half the filter frequency and the filter's own worst quality.
func (f *filterStudy) fill(out *Solution) error {
	own, err := f.stage.filterPoles()
	if err != nil {
		return err
	}
	grid, err := f.grid(own)
	if err != nil {
		return err
	}
	r := &InputFilter{Quality: math.NaN()}
	for _, p := range own {
		if imag(p) > 0 {
			if _, q := resonance(p, cmplx.Conj(p)); !(q <= r.Quality) {
				r.Quality = q
			}
		}
	}
	n, d := make([]float64, len(grid)), make([]float64, len(grid))
	for i, w := range grid {
		n[i], d[i] = f.ratios(w)
	}
	r.ZoOverZn = highest(grid, n, func(w float64) float64 { v, _ := f.ratios(w); return v })
	r.ZoOverZd = highest(grid, d, func(w float64) float64 { _, v := f.ratios(w); return v })
	out.Input = r
	return nil
}

// ratios returns |Zo/ZN| and |Zo/ZD| at a frequency (rad/s).
func (f *filterStudy) ratios(w float64) (overNull, overDriven float64) {
	n, d := f.quotients(w)
	return cmplx.Abs(n), cmplx.Abs(d)
}

// quotients returns Zo/ZN and Zo/ZD at a frequency (rad/s).
func (f *filterStudy) quotients(w float64) (overNull, overDriven complex128) {
	s := complex(0, w)
	m := f.m
	var byInput, byDuty [maxOrder]complex128
	for i := range m.order {
		byInput[i], byDuty[i] = complex(m.a[i][colInput], 0), complex(m.duty[i], 0)
	}
	if !f.a.solveComplex(m.order, s, &byInput, &byDuty) {
		return cmplx.NaN(), cmplx.NaN()
	}
	answer := func(o *output) (g, d complex128) {
		g, d = complex(o.row[colInput], 0), complex(o.duty, 0)
		for i := range m.order {
			k := complex(o.row[i], 0)
			g += k * byInput[i]
			d += k * byDuty[i]
		}
		return g, d
	}
	drawnG, drawnD := answer(&m.ig)
	outG, outD := answer(&m.vo)
	duty := complex(-f.ahead, 0)
	if f.law.gain > 0 {
		t := f.stage.Period
		x := w * t / math.Pi
		sense := complex(f.law.sense, 0) * complex(1-x*x, -w*t/2)
		riseG, riseD := answer(&m.rise)
		fallG, fallD := answer(&m.fall)
		sensed := output{row: m.sensed}
		nowG, nowD := answer(&sensed)
		rise, fall := complex(f.law.rise, 0), complex(f.law.fall, 0)
		duty = (rise*riseG + fall*fallG - sense*nowG) / (complex(1/f.law.gain, 0) + sense*nowD - rise*riseD - fall*fallD)
	}
	z := f.stage.filterImpedance(s)
	return z * (drawnG - drawnD*outG/outD), z * (drawnG + drawnD*duty)
}

// filterImpedance is Zo, Ω: what the converter sees of its input filter.
func (s *Stage) filterImpedance(at complex128) complex128 {
	y := 1 / (complex(s.FilterInductor.Resistance, 0) + at*complex(s.FilterInductor.Inductance, 0))
	for _, b := range s.shunts[:s.shuntCount] {
		c := at * complex(b.C, 0)
		y += c / (1 + c*complex(b.R, 0))
	}
	return 1 / y
}

// filterPoles returns the poles of the filter alone: source at one end, nothing drawn at the other.
func (s *Stage) filterPoles() ([]complex128, error) {
	var dx [maxStates]row
	left := unit(0)
	vt := node(s.shunts[:s.shuntCount], 1, &left, 0, &dx)
	dx[0][0] -= s.FilterInductor.Resistance
	dx[0].add(-1, &vt)
	dx[0].scale(1 / s.FilterInductor.Inductance)
	n := 1 + s.shuntCount
	var a square
	for i := range n {
		copy(a[i][:n], dx[i][:n])
	}
	return a.eigenvalues(n)
}

// grid returns ascending frequencies (rad/s) up to half the filter frequency: evenly on a logarithmic scale from two decades below the
// slowest pole, and closely around every lightly damped pair of filter, converter and of the zeros between duty and output.
func (f *filterStudy) grid(own []complex128) ([]float64, error) {
	roots := slices.Clone(own)
	poles, err := f.a.eigenvalues(f.m.order)
	if err != nil {
		return nil, err
	}
	roots = append(roots, poles...)
	k := f.m.control()
	if err := k.prepare(); err != nil {
		return nil, err
	}
	zeros, err := k.zeros()
	if err != nil {
		return nil, err
	}
	top := math.Pi * f.stage.FilterFrequency
	low := top
	for _, p := range roots {
		low = min(low, cmplx.Abs(p))
	}
	const spread = 48
	w := make([]float64, 0, 256)
	low = max(low/100, top*1e-12)
	for i := range spread {
		w = append(w, low*math.Pow(top/low, float64(i)/(spread-1)))
	}
	w[spread-1] = top
	for _, p := range append(roots, zeros...) {
		if imag(p) <= 0 {
			continue
		}
		width := min(math.Abs(real(p)), cmplx.Abs(p)/4)
		for _, n := range [...]float64{-8, -4, -2, -1, -0.5, 0, 0.5, 1, 2, 4, 8} {
			if v := imag(p) + n*width; v > low && v < top {
				w = append(w, v)
			}
		}
	}
	slices.Sort(w)
	return w, nil
}

// highest returns the maximum of f over the grid, refined by golden sections between the neighbours of the highest point.
func highest(grid, values []float64, f func(float64) float64) float64 {
	at := -1
	for i, v := range values {
		if !math.IsNaN(v) && (at < 0 || v > values[at]) {
			at = i
		}
	}
	if at < 0 {
		return math.NaN()
	}
	a, b := math.Log(grid[max(at-1, 0)]), math.Log(grid[min(at+1, len(grid)-1)])
	best := values[at]
	ratio := (math.Sqrt(5) - 1) / 2
	x, y := b-ratio*(b-a), a+ratio*(b-a)
	fx, fy := f(math.Exp(x)), f(math.Exp(y))
	for range 20 { // narrows the bracket by 1.5e4, a smooth maximum's height by its square
		best = max(best, fx, fy)
		if fx > fy {
			b, y, fy = y, x, fx
			x = b - ratio*(b-a)
			fx = f(math.Exp(x))
		} else {
			a, x, fx = x, y, fy
			y = a + ratio*(b-a)
			fy = f(math.Exp(y))
		}
	}
	return best
}

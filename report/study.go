package report

import (
	"fmt"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/workspace"
)

type effectOut struct {
	Path       string `json:"path"`
	PerPercent figure `json:"per-percent"`
	OverSpread figure `json:"over-spread"`
}

type sensitivitiesOut struct {
	PhaseMargin []effectOut `json:"phase-margin"`
	GainMargin  []effectOut `json:"gain-margin"`
	Crossover   []effectOut `json:"crossover"`
}

type yieldOut struct {
	Samples       int              `json:"samples"`
	Seed          uint64           `json:"seed"`
	Pass          figure           `json:"pass"`
	Interval      [2]figure        `json:"interval"`
	PhaseMargin   distributionOut  `json:"phase-margin"`
	GainMargin    distributionOut  `json:"gain-margin"`
	ModulusMargin distributionOut  `json:"modulus-margin"`
	Crossover     distributionOut  `json:"crossover"`
	RootSumSquare rootSumSquareOut `json:"root-sum-square"`
}

type distributionOut struct {
	P01     figure   `json:"p01"`
	P05     figure   `json:"p05"`
	P50     figure   `json:"p50"`
	P95     figure   `json:"p95"`
	P99     figure   `json:"p99"`
	Worst   figure   `json:"worst"`
	At      settings `json:"at,omitempty"`
	Without int      `json:"without"`
}

type rootSumSquareOut struct {
	PhaseMargin   marginSumOut `json:"phase-margin"`
	GainMargin    marginSumOut `json:"gain-margin"`
	ModulusMargin marginSumOut `json:"modulus-margin"`
}

type marginSumOut struct {
	Nominal   figure `json:"nominal"`
	HalfWidth figure `json:"half-width"`
	Low       figure `json:"low"`
}

type proofOut struct {
	PhaseMargin   *certificateOut `json:"phase-margin,omitempty"`
	GainMargin    *certificateOut `json:"gain-margin,omitempty"`
	ModulusMargin *certificateOut `json:"modulus-margin,omitempty"`
}

type certificateOut struct {
	Verdict string   `json:"verdict"`
	Limit   figure   `json:"limit"`
	At      settings `json:"at,omitempty"`
	Value   *figure  `json:"value,omitempty"`
	Boxes   int      `json:"boxes"`
	Left    *figure  `json:"left,omitempty"`
	Why     string   `json:"why,omitempty"`
}

func sensitivitiesOf(s *analysis.Sensitivities) *sensitivitiesOut {
	if s == nil {
		return nil
	}
	list := func(of []analysis.Effect) []effectOut {
		out := []effectOut{}
		for _, e := range of {
			out = append(out, effectOut{e.Path, figure(e.PerPercent), figure(e.OverSpread)})
		}
		return out
	}
	return &sensitivitiesOut{list(s.PhaseMargin), list(s.GainMargin), list(s.Crossover)}
}

func yieldOf(y *analysis.Yield) *yieldOut {
	if y == nil {
		return nil
	}
	of := func(d analysis.Distribution) distributionOut {
		return distributionOut{figure(d.P01), figure(d.P05), figure(d.P50), figure(d.P95), figure(d.P99), figure(d.Worst), settings(d.At), d.Without}
	}
	sum := func(r analysis.RootSumSquare) marginSumOut {
		return marginSumOut{figure(r.Nominal), figure(r.HalfWidth), figure(r.Low)}
	}
	r := y.RootSumSquare
	return &yieldOut{
		y.Samples, y.Seed, figure(y.Pass), [2]figure{figure(y.Interval[0]), figure(y.Interval[1])},
		of(y.PhaseMargin), of(y.GainMargin), of(y.ModulusMargin), of(y.Crossover),
		rootSumSquareOut{sum(r.PhaseMargin), sum(r.GainMargin), sum(r.ModulusMargin)},
	}
}

func proofOf(p *analysis.Proof) *proofOut {
	if p == nil {
		return nil
	}
	return &proofOut{certificateOf(p.PhaseMargin), certificateOf(p.GainMargin), certificateOf(p.ModulusMargin)}
}

func certificateOf(c *analysis.Certificate) *certificateOut {
	if c == nil {
		return nil
	}
	out := &certificateOut{Verdict: c.Verdict.String(), Limit: figure(c.Limit), At: settings(c.At), Boxes: c.Boxes, Why: c.Why}
	if !math.IsNaN(c.Value) {
		out.Value = pointer(c.Value)
	}
	if c.Verdict == analysis.Undecided {
		out.Left = pointer(c.Left)
	}
	return out
}

// mostEffects is how many parts the text lists for each figure.
const mostEffects = 5

// effects lists the parts that move the worst figures most.
func (p *figurePage) effects() error {
	s := p.file.Sensitivities
	if s == nil || p.o.At != nil {
		return nil
	}
	t := table{left: 2}
	t.row("", "", "1 % more", "over its spread")
	rows := 0
	list := func(name, unit string, of []analysis.Effect) {
		for _, e := range of[:min(len(of), mostEffects)] {
			t.row(name, p.part(e.Path), signed(e.PerPercent, unit), signed(e.OverSpread, unit))
			name = ""
			rows++
		}
	}
	list("phase margin", "deg", s.PhaseMargin)
	list("gain margin", "dB", s.GainMargin)
	list("crossover", "%", s.Crossover)
	if rows == 0 {
		return nil
	}
	fmt.Fprintf(p.w, "\n%s\n", p.bold("What moves the worst figures, each at its own corner"))
	return t.write(p.w, "  ")
}

// part names a part of the analysis as findings do.
func (p *figurePage) part(path string) string {
	c := rules.Case{Spec: p.file.Spec, Design: p.design, Result: p.file.Result}
	if words, _ := c.PartWords(path); words != "" {
		return words
	}
	return path
}

// signed is a change with its sign; crossover effects are per cent already.
func signed(v float64, unit string) string {
	if math.IsNaN(v) {
		return "–"
	}
	if unit == "%" {
		v /= 100
	}
	if printed := shown(v, unit); v <= 0 {
		return printed
	} else {
		return "+" + printed
	}
}

// units is the page's part on the yield.
func (p *figurePage) units() error {
	y := p.file.Yield
	if y == nil || p.o.At != nil {
		return nil
	}
	fmt.Fprintf(p.w, "\n%s\n", p.bold(fmt.Sprintf("Built units (Monte Carlo, %d units, seed %d)", y.Samples, y.Seed)))
	fmt.Fprintf(p.w, "  %s of them are stable and meet every margin at every operating corner (95 %% confidence: %s to %s)\n",
		share(y.Pass), share(y.Interval[0]), share(y.Interval[1]))
	fmt.Fprintln(p.w, "  Each tolerance is drawn on its own: below and above nominal equally likely, evenly spread out to its limit.")
	fmt.Fprintln(p.w, "  A unit counts with the worst of its operating corners.")
	t := table{left: 1}
	t.row("", "1 %", "5 %", "median", "95 %", "99 %", "worst unit", "root sum square")
	line := func(name, unit string, d analysis.Distribution, sum *analysis.RootSumSquare) {
		row := []string{name}
		for _, v := range []float64{d.P01, d.P05, d.P50, d.P95, d.P99, d.Worst} {
			row = append(row, orDash(v, unit))
		}
		if sum != nil {
			row = append(row, orDash(sum.Low, unit))
		}
		t.row(row...)
	}
	r := &y.RootSumSquare
	line("phase margin", "deg", y.PhaseMargin, &r.PhaseMargin)
	line("gain margin", "dB", y.GainMargin, &r.GainMargin)
	line("modulus margin", "", y.ModulusMargin, &r.ModulusMargin)
	line("crossover, highest", "Hz", y.Crossover, nil)
	if err := t.write(p.w, "  "); err != nil {
		return err
	}
	if n := y.GainMargin.Without; n > 0 && n < y.Samples {
		fmt.Fprintf(p.w, "  %s without a gain margin: their phase never reaches −180°\n", plural(n, "unit"))
	}
	return nil
}

func orDash(v float64, unit string) string {
	if math.IsNaN(v) {
		return "–"
	}
	return shown(v, unit)
}

// share is a part of all, per cent; only all of them is 100 %.
func share(v float64) string {
	switch {
	case v == 1:
		return "100 %"
	case v > 0.9995:
		return fmt.Sprintf("%.2f %%", math.Floor(v*1e4)/1e2)
	}
	return shown(v, "%")
}

// certificates is the page's part on the proof.
func (p *figurePage) certificates() error {
	lines := rules.CertificateWords(p.file.Proof)
	if len(lines) == 0 || p.o.At != nil {
		return nil
	}
	fmt.Fprintf(p.w, "\n%s\n", p.bold("Certificate over the whole box of input, load and tolerances"))
	for i, line := range lines {
		for _, part := range atCommas("  "+line, 118) {
			fmt.Fprintln(p.w, strings.TrimRight(part, " "))
		}
		if at := p.counterexample(i); at != "" {
			fmt.Fprintln(p.w, "    at "+at)
		}
	}
	return nil
}

// counterexample words the point that refutes the line of that index.
func (p *figurePage) counterexample(line int) string {
	for _, c := range []*analysis.Certificate{p.file.Proof.PhaseMargin, p.file.Proof.GainMargin, p.file.Proof.ModulusMargin} {
		if c == nil {
			continue
		}
		if line == 0 && c.Verdict == analysis.Refuted {
			return p.words(c.At)
		}
		line--
	}
	return ""
}

// proofLines are the certificates of a file for a reader of findings.
func proofLines(f workspace.File) []string {
	var lines []string
	for _, words := range rules.CertificateWords(f.Proof) {
		lines = append(lines, safe(f.Path)+": "+words)
	}
	return lines
}

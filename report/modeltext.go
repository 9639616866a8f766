package report

import (
	"fmt"
	"math"
	"strings"

	"halfplane/analysis/plant"
)

// model sets the first corner's small-signal model beside the closed forms without losses, then its poles and zeros.
func (p *figurePage) model() error {
	if len(p.chosen.corners) == 0 {
		return nil
	}
	c := p.chosen.corners[0]
	if !c.Reached {
		return nil
	}
	fmt.Fprintf(p.w, "\n%s\n", p.bold("Power stage at "+p.words(c.At)))
	if !c.Plant.HasModel {
		_, err := fmt.Fprintf(p.w, "  no small-signal model of a %s in %s conduction\n", p.file.Spec.Text("/topology"), inFull(c.Plant.Mode))
		return err
	}
	s, i := &c.Plant, &c.Ideal
	gain, formControl, formLine := "V", i.ControlGain, i.LineGain
	if s.Current != nil { // volts per control volt; the closed forms are per duty
		gain, formControl, formLine = "", math.NaN(), math.NaN()
	}
	t := table{left: 1}
	t.row("", "with losses", "closed form")
	for _, r := range []struct {
		label     string
		got, form float64
		unit      string
	}{
		{"duty", s.Duty, i.Duty, ""},
		{"control gain", s.ControlGain, formControl, gain},
		{"line gain", s.LineGain, formLine, ""},
		{"resonance", s.Resonance, i.Resonance, "Hz"},
		{"quality", s.Quality, i.Quality, ""},
		{"ESR zero", s.ESRZero, i.ESRZero, "Hz"},
		{"RHP zero", s.RHPZero, i.RHPZero, "Hz"},
		{"duty peak", c.DutyPeak, math.NaN(), ""},
	} {
		if !math.IsNaN(r.got) || !math.IsNaN(r.form) {
			t.row(r.label, dash(r.got, r.unit), dash(r.form, r.unit))
		}
	}
	if cl := s.Current; cl != nil {
		t.row("current slope", dash(cl.OnSlope, "V/s"), "")
		t.row("added slope", dash(cl.ExternalSlope, "V/s"), "")
		t.row("slope ratio mc", dash(cl.SlopeRatio, ""), "")
		t.row("mc·D′, above 1/2", dash(cl.OffDutyProduct, ""), "")
		t.row("half-frequency quality", dash(cl.HalfFrequencyQuality, ""), "")
	}
	if in := s.Input; in != nil {
		t.row("filter quality, alone", dash(in.Quality, ""), "")
		t.row("filter Zo/ZN, largest", dash(in.ZoOverZn, ""), "")
		t.row("filter Zo/ZD, largest", dash(in.ZoOverZd, ""), "")
	}
	if err := t.write(p.w, "  "); err != nil {
		return err
	}
	_, err := fmt.Fprintf(p.w, "  poles  %s\n  zeros  %s\n", rootWords(s.Control.Poles), rootWords(s.Control.Zeros))
	return err
}

func inFull(m plant.Mode) string {
	if m == plant.Discontinuous {
		return "discontinuous"
	}
	return "continuous"
}

// dash is a figure, or the dash of one that does not exist.
func dash(v float64, unit string) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "–"
	}
	return shown(v, unit)
}

// rootWords lists roots by frequency: a pair with its quality, and what lies in the right half-plane said so.
func rootWords(of []complex128) string {
	var out []string
	for _, r := range of {
		if imag(r) < 0 {
			continue // its conjugate is told
		}
		hz := math.Hypot(real(r), imag(r)) / (2 * math.Pi)
		words := shown(hz, "Hz")
		if imag(r) > 0 {
			words += " (pair, quality " + shown(math.Abs(math.Hypot(real(r), imag(r))/(2*real(r))), "") + ")"
		}
		if real(r) > 0 {
			words += " in the right half-plane"
		}
		out = append(out, words)
	}
	if len(out) == 0 {
		return "none"
	}
	return strings.Join(out, ", ")
}

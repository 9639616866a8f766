package report

import (
	"fmt"
	"io"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/workspace"
)

// Definitions say in one line each what a figure is.
const Definitions = `duty              fraction of the output filter's own period during which the filter is driven
inductor          average current and peak-to-peak ripple of one phase, on the output side
resonance         of the power stage alone: without input filter and without current loop
RHP zero          lowest right-half-plane zero of the control-to-output response
crossover         highest frequency at which the loop gain is one
phase margin      smallest angle to −1 over all crossovers; negative: the closed loop is unstable
with ripple       the phase margin with the output ripple at the comparator counted (voltage mode, continuous conduction);
                  the averaged figures beside it leave the ripple out: trust the lower of the two
gain margin       gain that may be added before the loop oscillates; negative: it does
modulus margin    closest approach of the loop gain to −1
slope ratio mc    1 + Se/Sn, added slope over current slope; the inner loop of peak current mode needs mc·D′ above 1/2
crossover / RHP   crossover over the right-half-plane zero of the same corner`

// TextFigures writes the figures of one analysed design for a reader: what was assumed, the operating corners, the nominal
// model beside its closed forms, and the worst figures with the corner of each in words.
func TextFigures(w io.Writer, f workspace.File, o FigureOptions) error {
	p := figurePage{w: w, file: f, design: f.Spec.Design(), chosen: choose(f.Result, o), o: o}
	for _, part := range []func() error{p.header, p.corners, p.models, p.model, p.worst, p.effects, p.units, p.certificates, p.outcomes} {
		if err := part(); err != nil {
			return err
		}
	}
	return nil
}

type figurePage struct {
	w      io.Writer
	file   workspace.File
	design *analysis.Design
	chosen selection
	o      FigureOptions
}

func (p *figurePage) bold(s string) string {
	if !p.o.Color {
		return s
	}
	return "\x1b[1m" + s + "\x1b[0m"
}

func (p *figurePage) header() error {
	spec := p.file.Spec
	c := &p.design.Nominal.Circuit
	low, nominal, high, turns := stageExtent(p.design)
	kind := []string{spec.Text("/topology"), spec.Text("/modulator/scheme"), spec.Text("/compensator/network") + " network"}
	if c.Phases > 1 {
		kind = append(kind, plural(c.Phases, "phase"))
	}
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n%s\n\n", p.bold(safe(spec.Text("/title"))), safe(p.file.Path))
	fmt.Fprintf(&b, "  %s at %s\n", strings.Join(kind, ", "), shown(c.SwitchingFrequency, "Hz"))
	fmt.Fprintf(&b, "  %s in, %s out, %s\n", p.extent("/input-voltage"), shown(c.OutputVoltage, "V"), p.extent("/load/current"))
	where := ""
	if c.Topology.Isolated() {
		where = fmt.Sprintf(" on the output side, turns ratio %s", shown(turns, ""))
	}
	fmt.Fprintf(&b, "  inductance %s (%s to %s)%s\n", shown(nominal, "H"), shown(low, "H"), shown(high, "H"), where)
	for i, words := range p.assumed() {
		label := "  assumed: "
		if i > 0 {
			label = "           "
		}
		fmt.Fprintf(&b, "%s%s\n", label, words)
	}
	_, err := io.WriteString(p.w, b.String()+"\n")
	return err
}

// extent is a quantity from its lowest to its highest value.
func (p *figurePage) extent(pointer string) string {
	q, ok := p.file.Spec.Quantity(pointer)
	if !ok {
		return ""
	}
	if q.Min == q.Max {
		return shown(q.Nominal, q.Unit)
	}
	return shown(q.Min, q.Unit) + " to " + shown(q.Max, q.Unit)
}

// assumed lists what the file leaves open and the figures stand on.
func (p *figurePage) assumed() []string {
	var out []string
	spec := p.file.Spec
	for _, axis := range p.design.Axes {
		pointer := "/" + strings.ReplaceAll(axis.Path, ".", "/")
		if q, ok := spec.Quantity(pointer); ok && q.AssumedNominal {
			out = append(out, fmt.Sprintf("%s %s nominal, the middle of its range", axis.Path, shown(q.Nominal, q.Unit)))
		}
	}
	if !spec.Has("/load/behaviour") {
		out = append(out, "the load is resistive")
	}
	switch spec.Text("/compensator/network") {
	case "type-1", "type-2", "type-3":
		if !spec.Has("/compensator/amplifier") {
			out = append(out, "the amplifier is ideal")
		}
	}
	if !spec.Has("/modulator/delay") {
		out = append(out, "the modulator has no delay")
	}
	return out
}

// corners is the table of operating corners; with --at it has the one row.
func (p *figurePage) corners() error {
	title := "Operating corners, nominal parts"
	rows := p.chosen.corners
	switch {
	case p.o.At != nil:
		title = "One point, as assigned"
	case p.o.AllCorners:
		title = "Every point analysed"
	default:
		rows = rows[:min(len(rows), p.file.Result.Operating+1)]
	}
	ripple, second := false, false
	for _, c := range rows {
		ripple = ripple || c.Ripple != nil
		second = second || c.Reached && !math.IsNaN(c.Plant.SecondCurrent)
	}
	t := table{left: 2}
	t.row(pick(second, ripple, []string{"", "corner", "mode", "duty", "inductor", "ripple", "second", "ripple",
		"resonance", "RHP zero", "crossover", "phase", "with", "gain", "modulus"})...)
	t.row(pick(second, ripple, []string{"", "", "", "", "", "", "inductor", "", "", "", "", "margin", "ripple", "margin", "margin"})...)
	for i, c := range rows {
		t.row(pick(second, ripple, append([]string{fmt.Sprint(i), p.name(i, c)}, cells(c)...))...)
	}
	fmt.Fprintln(p.w, p.bold(title))
	return t.write(p.w, "  ")
}

// pick leaves out the columns that no row has.
func pick(second, ripple bool, row []string) []string {
	var out []string
	for i, cell := range row {
		if !second && (i == 6 || i == 7) || !ripple && i == 12 {
			continue
		}
		out = append(out, cell)
	}
	return out
}

func (p *figurePage) name(i int, c *analysis.Corner) string {
	words := p.words(c.At)
	if i == 0 && p.o.At == nil {
		words += " (nominal)"
	}
	return words
}

// words says a corner as an engineer does.
func (p *figurePage) words(at []analysis.Setting) string {
	return rules.CornerWords(p.file.Spec, p.design, at)
}

// cells are a corner's figures from the mode on; a dash stands for what does not exist.
func cells(c *analysis.Corner) []string {
	out := make([]string, 13)
	for i := range out {
		out[i] = "–"
	}
	if !c.Reached {
		out[0] = "out of reach"
		return out
	}
	put := func(i int, v float64, unit string) {
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			out[i] = shown(v, unit)
		}
	}
	s := &c.Plant
	out[0] = s.Mode.String()
	put(1, s.Duty, "")
	put(2, s.InductorCurrent, "A")
	put(3, s.InductorRipple, "A")
	put(4, s.SecondCurrent, "A")
	put(5, s.SecondRipple, "A")
	if s.HasModel {
		put(6, s.Resonance, "Hz")
		put(7, s.RHPZero, "Hz")
	}
	if l := c.Loop; l != nil {
		put(8, l.Crossover, "Hz")
		put(9, l.PhaseMargin, "deg")
		if math.IsNaN(l.PhaseMargin) && !l.Stable {
			out[9] = "unstable"
		}
		put(11, l.GainMargin, "dB")
		put(12, l.ModulusMargin, "")
	}
	if c.Ripple != nil {
		put(10, c.Ripple.PhaseMargin, "deg")
	}
	return out
}

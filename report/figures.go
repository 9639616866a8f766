package report

import (
	"io"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/loop"
	"halfplane/analysis/plant"
	"halfplane/workspace"
)

// FigureOptions say which figures of an analysis are written.
type FigureOptions struct {
	AllCorners bool             // every point analysed, instead of the operating corners and those that a worst figure refers to
	At         *analysis.Corner // this one point only; there is no worst of one point
	Color      bool             // text only
}

// JSONFigures writes the figures of one analysed design (schema: FiguresSchema).
func JSONFigures(w io.Writer, f workspace.File, o FigureOptions) error {
	return encode(w, figuresOf(f, o))
}

type figuresDocument struct {
	Design              string      `json:"design"`
	Title               string      `json:"title"`
	Topology            string      `json:"topology"`
	TurnsRatio          figure      `json:"turns-ratio"`
	EffectiveInductance extent      `json:"effective-inductance"`
	Corners             []cornerOut `json:"corners"`
	Worst               any         `json:"worst"`
	Method              string      `json:"method"`
	Complete            bool        `json:"complete"`
	Analysed            int         `json:"analysed"`

	Sensitivities *sensitivitiesOut `json:"sensitivities,omitempty"`
	Yield         *yieldOut         `json:"yield,omitempty"`
	Proof         *proofOut         `json:"proof,omitempty"`

	Outcomes []outcomeOut `json:"outcomes,omitempty"`
}

type extent struct {
	Min     figure `json:"min"`
	Nominal figure `json:"nominal"`
	Max     figure `json:"max"`
}

type cornerOut struct {
	At              settings        `json:"at"`
	Mode            *string         `json:"mode"`
	Duty            figure          `json:"duty"`
	InductorCurrent figure          `json:"inductor-current"`
	InductorRipple  figure          `json:"inductor-ripple"`
	SecondCurrent   *figure         `json:"second-inductor-current,omitempty"`
	SecondRipple    *figure         `json:"second-inductor-ripple,omitempty"`
	Stage           stageOut        `json:"stage"`
	Plant           *plantOut       `json:"plant"`
	Ideal           *idealOut       `json:"ideal,omitempty"`
	DutyPeak        *figure         `json:"duty-peak,omitempty"`
	CurrentLoop     *currentLoopOut `json:"current-loop,omitempty"`
	InputFilter     *inputFilterOut `json:"input-filter,omitempty"`
	Loop            *loopOut        `json:"loop"`
}

type stageOut struct {
	Inductance  figure `json:"inductance"`
	Capacitance figure `json:"capacitance"`
	ESR         figure `json:"esr"`
}

type plantOut struct {
	ControlGain figure      `json:"control-gain"`
	LineGain    figure      `json:"line-gain"`
	Resonance   figure      `json:"resonance"`
	Quality     figure      `json:"quality"`
	ESRZero     figure      `json:"esr-zero"`
	RHPZero     figure      `json:"rhp-zero"`
	Poles       [][2]figure `json:"poles"`
	Zeros       [][2]figure `json:"zeros"`
}

type idealOut struct {
	Duty        figure `json:"duty"`
	ControlGain figure `json:"control-gain"`
	LineGain    figure `json:"line-gain"`
	Resonance   figure `json:"resonance"`
	Quality     figure `json:"quality"`
	ESRZero     figure `json:"esr-zero"`
	RHPZero     figure `json:"rhp-zero"`
}

type currentLoopOut struct {
	OnSlope              figure `json:"on-slope"`
	ExternalSlope        figure `json:"external-slope"`
	SlopeRatio           figure `json:"slope-ratio"`
	HalfFrequencyQuality figure `json:"half-frequency-quality"`
}

type inputFilterOut struct {
	ZoOverZn figure `json:"zo-over-zn"`
	ZoOverZd figure `json:"zo-over-zd"`
	Quality  figure `json:"quality"`
}

type loopOut struct {
	Crossover           figure   `json:"crossover"`
	Crossovers          []figure `json:"crossovers"`
	PhaseMargin         figure   `json:"phase-margin"`
	GainMargin          figure   `json:"gain-margin"`
	GainReductionMargin *figure  `json:"gain-reduction-margin,omitempty"`
	ModulusMargin       figure   `json:"modulus-margin"`
	Stable              bool     `json:"stable"`
	WithRipple          *loopOut `json:"with-ripple,omitempty"`
}

func figuresOf(f workspace.File, o FigureOptions) figuresDocument {
	chosen := choose(f.Result, o)
	out := figuresDocument{
		Design:   clean(f.Path),
		Title:    f.Spec.Text("/title"),
		Topology: f.Spec.Text("/topology"),
		Worst:    worstOf(f.Result, chosen.index),
		Method:   f.Result.Method,
		Complete: f.Result.Complete,
		Analysed: f.Result.Analysed,

		Sensitivities: sensitivitiesOf(f.Sensitivities),
		Yield:         yieldOf(f.Yield),
		Proof:         proofOf(f.Proof),
		Outcomes:      outcomesOf(f.Outcomes),
	}
	if o.At != nil {
		out.Worst, out.Method, out.Outcomes = nil, "one point, as assigned", nil
		out.Complete, out.Analysed, out.Sensitivities = true, 1, nil
	}
	low, nominal, high, turns := stageExtent(f.Spec.Design())
	out.EffectiveInductance = extent{figure(low), figure(nominal), figure(high)}
	out.TurnsRatio = figure(turns)
	for _, c := range chosen.corners {
		out.Corners = append(out.Corners, cornerOf(c))
	}
	return out
}

func cornerOf(c *analysis.Corner) cornerOut {
	out := cornerOut{
		At: settings(c.At), Duty: none, InductorCurrent: none, InductorRipple: none, Stage: stageOut{none, none, none},
		Ideal: idealOf(c.Ideal),
	}
	if out.Ideal != nil {
		out.DutyPeak = pointer(c.DutyPeak)
	}
	p := &c.Plant
	if p.StageInductance > 0 { // known also where no duty reaches the output voltage
		out.Stage = stageOut{figure(p.StageInductance), figure(p.StageCapacitance), figure(p.StageESR)}
	}
	if !c.Reached {
		return out
	}
	mode := p.Mode.String()
	out.Mode = &mode
	out.Duty, out.InductorCurrent, out.InductorRipple = figure(p.Duty), figure(p.InductorCurrent), figure(p.InductorRipple)
	if !math.IsNaN(p.SecondCurrent) {
		out.SecondCurrent, out.SecondRipple = pointer(p.SecondCurrent), pointer(p.SecondRipple)
	}
	if i := p.Current; i != nil {
		out.CurrentLoop = &currentLoopOut{figure(i.OnSlope), figure(i.ExternalSlope), figure(i.SlopeRatio), figure(i.HalfFrequencyQuality)}
	}
	if i := p.Input; i != nil {
		out.InputFilter = &inputFilterOut{figure(i.ZoOverZn), figure(i.ZoOverZd), figure(i.Quality)}
	}
	if !p.HasModel {
		return out
	}
	out.Plant = &plantOut{
		figure(p.ControlGain), figure(p.LineGain), figure(p.Resonance), figure(p.Quality), figure(p.ESRZero), figure(p.RHPZero),
		roots(p.Control.Poles, p.Control.Integrators), roots(p.Control.Zeros, -p.Control.Integrators),
	}
	if out.Loop = loopOf(c.Loop); out.Loop != nil {
		out.Loop.WithRipple = loopOf(c.Ripple)
	}
	return out
}

func loopOf(l *loop.Figures) *loopOut {
	if l == nil {
		return nil
	}
	out := &loopOut{
		Crossover: figure(l.Crossover), Crossovers: []figure{}, PhaseMargin: figure(l.PhaseMargin), GainMargin: figure(l.GainMargin),
		ModulusMargin: figure(l.ModulusMargin), Stable: l.Stable,
	}
	for _, hz := range l.Crossovers {
		out.Crossovers = append(out.Crossovers, figure(hz))
	}
	if !math.IsNaN(l.GainReductionMargin) {
		out.GainReductionMargin = pointer(l.GainReductionMargin)
	}
	return out
}

// idealOf is nil for a corner whose closed forms were not computed.
func idealOf(i plant.Ideal) *idealOut {
	if i == (plant.Ideal{}) || math.IsNaN(i.Duty+i.ESRZero) && math.IsNaN(i.ControlGain) {
		return nil
	}
	return &idealOut{figure(i.Duty), figure(i.ControlGain), figure(i.LineGain), figure(i.Resonance), figure(i.Quality), figure(i.ESRZero), figure(i.RHPZero)}
}

// roots are pairs of real and imaginary part in rad/s, those at the origin first.
func roots(of []complex128, atOrigin int) [][2]figure {
	out := [][2]figure{}
	for range max(0, atOrigin) {
		out = append(out, [2]figure{0, 0})
	}
	for _, r := range of {
		out = append(out, [2]figure{figure(real(r)), figure(imag(r))})
	}
	return out
}

// none is a figure that does not exist.
var none = figure(math.NaN())

func pointer(v float64) *figure {
	f := figure(v)
	return &f
}

// stageExtent gives the effective inductance of one phase on the output-filter side, over the spread of the windings, and
// the turns ratio. An inductance in parallel grows with each of its parts, so the extremes lie where all are at theirs.
func stageExtent(d *analysis.Design) (low, nominal, high, turns float64) {
	at := func(pick func(analysis.Axis) float64) plant.Stage {
		point := d.Nominal
		for _, axis := range d.Axes {
			if axis.Path == "inductor.inductance" || axis.Path == "second-inductor.inductance" {
				if field := analysis.Field(&point, axis.Path); field != nil {
					*field = pick(axis)
				}
			}
		}
		return plant.Reflect(&point.Circuit)
	}
	middle := at(func(a analysis.Axis) float64 { return a.Nominal })
	least := at(func(a analysis.Axis) float64 { return a.Min })
	most := at(func(a analysis.Axis) float64 { return a.Max })
	phases := middle.Phases // a stage holds all phases as one
	return least.Inductance * phases, middle.Inductance * phases, most.Inductance * phases, middle.Turns
}

package lsp

import (
	"fmt"

	"halfplane/analysis"
)

// aboutTopology writes the nominal operating point: what the loss-free closed forms say, and the model with losses.
func (p *place) aboutTopology() {
	o, stale := p.figures()
	if o == nil {
		return
	}
	c := &o.file.Result.Corners[0]
	if !c.Reached {
		p.say("At nominal input, load and parts no duty reaches the output voltage.")
		return
	}
	p.say("At nominal input, load and parts (" + c.Plant.Mode.String() + "), ideal and with losses" + stale + ":")
	p.list(append(pairs(c), loopLines(c)...))
}

// figures gives the check whose figures are shown, and what to say where it is one of an older text.
func (p *place) figures() (o *outcome, stale string) {
	if p.fresh != nil && p.fresh.file.Result != nil {
		return p.fresh, ""
	}
	if p.good == nil {
		return nil, ""
	}
	return p.good, " (of the last text that could be checked)"
}

// pairs sets the ideal figure beside the lossy one; a figure that exists in neither is left out.
func pairs(c *analysis.Corner) []string {
	var out []string
	perDuty := "V" // volts per unit duty; per control volt in current mode
	if c.Plant.Current != nil {
		perDuty = ""
	}
	for _, f := range []struct {
		name        string
		ideal, real float64
		unit        string
	}{
		{"duty", c.Ideal.Duty, c.Plant.Duty, ""},
		{"control gain", c.Ideal.ControlGain, c.Plant.ControlGain, perDuty},
		{"line gain", c.Ideal.LineGain, c.Plant.LineGain, ""},
		{"resonance", c.Ideal.Resonance, c.Plant.Resonance, "Hz"},
		{"quality", c.Ideal.Quality, c.Plant.Quality, ""},
		{"right-half-plane zero", c.Ideal.RHPZero, c.Plant.RHPZero, "Hz"},
		{"ESR zero", c.Ideal.ESRZero, c.Plant.ESRZero, "Hz"},
	} {
		if !c.Plant.HasModel && f.name != "duty" {
			continue
		}
		ideal, real := figure(f.ideal, f.unit), figure(f.real, f.unit)
		switch {
		case ideal == "" && real == "":
		case ideal == "":
			out = append(out, fmt.Sprintf("%s: %s with losses", f.name, real))
		case real == "":
			out = append(out, fmt.Sprintf("%s: %s ideal", f.name, ideal))
		default:
			out = append(out, fmt.Sprintf("%s: %s, %s", f.name, ideal, real))
		}
	}
	return out
}

// loopLines gives the margins of the lossy loop, none where there is no model.
func loopLines(c *analysis.Corner) []string {
	if c.Loop == nil {
		return nil
	}
	var out []string
	for _, f := range []struct {
		name  string
		value float64
		unit  string
	}{
		{"crossover", c.Loop.Crossover, "Hz"},
		{"phase margin", c.Loop.PhaseMargin, "deg"},
		{"gain margin", c.Loop.GainMargin, "dB"},
	} {
		if shown := figure(f.value, f.unit); shown != "" {
			out = append(out, f.name+": "+shown)
		}
	}
	return out
}

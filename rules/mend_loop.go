package rules

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/synthesis"
	"halfplane/schema"
)

// The repairs of what the loop does: other values of the compensator's parts. All rules that read the loop's figures share them: a choice of values is a
// repair when none of these rules has anything graver than a note to say any more.

// slack is how much better than asked a choice must be at quick depth, so that full depth, which finds somewhat worse corners, still finds it good.
type slack struct{ degrees, decibels, part float64 }

// slacks are tried one after another, the smallest first.
var slacks = [...]slack{{0.3, 0.1, 0.01}, {2, 0.5, 0.04}, {5, 1.2, 0.1}, {10, 2.5, 0.2}}

// byValues are the rules that the values of a compensator's parts decide. What the others say of the loop (a pole that is not stated, an amplifier's bandwidth that is
// not given) no value changes.
var byValues = map[string]bool{
	"closed-loop-stability": true, "phase-margin": true, "gain-margin": true, "modulus-margin": true, "conditional-stability": true, "several-crossovers": true,
	"crossover-range": true, "low-frequency-gain": true, "comparator-ripple": true, "sampling-delay": true, "rhp-zero-crossover": true, "resonance-crossover": true,
	"switching-crossover": true,
}

// loopProblem is the search for values of the compensator's parts; what was tried with one slack is remembered.
func (c *Case) loopProblem(s slack) *synthesis.Problem {
	if c.pointed != nil {
		if p := c.pointed.problems[s]; p != nil {
			return p
		}
		p := c.newLoopProblem(s)
		c.pointed.problems[s] = p
		return p
	}
	return c.newLoopProblem(s)
}

func (c *Case) newLoopProblem(s slack) *synthesis.Problem {
	tight := *c
	tight.Settings = c.tightened(s)
	return &synthesis.Problem{
		Design: c.Design, Parts: c.looseParts(), Jobs: 1,
		Judge: func(d *analysis.Design, r *analysis.Result) float64 {
			return tight.violation(d, r)
		},
	}
}

// tightened are settings that ask for a little more than is asked.
func (c *Case) tightened(s slack) Settings {
	out := Settings{Severities: c.Settings.Severities, Thresholds: map[string]float64{}}
	for key, v := range c.Settings.Thresholds {
		out.Thresholds[key] = v
	}
	need := c.Need()
	out.Thresholds[phaseMarginLimit.Key] = need.PhaseMargin + s.degrees
	out.Thresholds[gainMarginLimit.Key] = need.GainMargin + s.decibels
	out.Thresholds[modulusMarginLimit.Key] = need.ModulusMargin * (1 + s.part/2)
	out.Thresholds[rhpZeroFraction.Key] = c.threshold(rhpZeroFraction) * (1 - s.part)
	out.Thresholds[switchingFraction.Key] = c.threshold(switchingFraction) * (1 - s.part)
	out.Thresholds[samplingFraction.Key] = c.threshold(samplingFraction) * (1 - s.part)
	out.Thresholds[reductionMargin.Key] = c.threshold(reductionMargin) + s.decibels
	return out
}

// violation is how far a design is from having nothing graver than notes from the rules that read the loop's figures: for each finding what it lacks as a part of
// its limit, and a little for its being there.
func (c *Case) violation(d *analysis.Design, r *analysis.Result) float64 {
	tried := &Case{Spec: c.Spec, Design: d, Settings: c.Settings, Result: r}
	sum := 0.0
	for _, rule := range c.every {
		if !byValues[rule.Name] || c.Settings.Severities[rule.Name] == None {
			continue
		}
		out := decide(tried, rule)
		if out.Panic != "" {
			return math.Inf(1)
		}
		for i := range out.Findings {
			if f := &out.Findings[i]; f.Severity > Note {
				sum += shortfall(f)
			}
		}
	}
	return sum
}

// shortfall is what one finding lacks, from 0.05 to 3.
func shortfall(f *Finding) float64 {
	lack := 1.0
	if f.Measured != nil && f.Limit != nil {
		lack = math.Abs(f.Measured.Value-f.Limit.Value) / math.Max(math.Abs(f.Limit.Value), 1e-12)
	}
	if f.Rule == "closed-loop-stability" {
		lack++
	}
	if math.IsNaN(lack) {
		lack = 1
	}
	return 0.05 + math.Min(lack, 3)
}

// looseParts are the compensator's parts that may take other values: those that the file itself states. The divider stays, it sets the
// output voltage; what is no part to be bought takes two digits.
func (c *Case) looseParts() []synthesis.Part {
	var parts []synthesis.Part
	add := func(key string, low, high float64, bought bool) {
		pointer := "/compensator/" + strings.ReplaceAll(key, ".", "/")
		q, ok := c.Spec.Quantity(pointer)
		if !ok || q.Node.Doc != c.Spec.Document || q.Nominal <= 0 {
			return
		}
		part := synthesis.Part{Path: "compensator." + key, Low: math.Min(low, q.Nominal), High: math.Max(high, q.Nominal)}
		if bought {
			part.Series = []analysis.Series{analysis.E24}
			if tolerance, stated := q.Tolerance(); stated {
				part.Series = analysis.SeriesFor(tolerance)
			}
		}
		parts = append(parts, part)
	}
	switch c.Design.Nominal.Network.Kind {
	case network.Digital:
		if c.Spec.Has("/compensator/numerator") {
			parts = append(parts, synthesis.Part{Path: synthesis.Numerator, Low: 1e-4, High: 1e4})
		}
		return parts
	case network.TransferFunction:
		add("integrator", 1e-2, 1e7, false)
		add("gain", 1e-6, 1e6, false)
		for i := range c.Design.Nominal.Network.Zeros {
			add("zeros."+strconv.Itoa(i), 1, 1e7, false)
		}
		for i := range c.Design.Nominal.Network.Poles {
			add("poles."+strconv.Itoa(i), 10, 1e8, false)
		}
		return parts
	}
	add("feedback-resistor", 100, 10e6, true)
	add("led-resistor", 100, 100e3, true)
	add("integrator-capacitor", 10e-12, 10e-6, true)
	add("rolloff-capacitor", 4.7e-12, 1e-6, true)
	add("lead-resistor", 10, 1e6, true)
	add("lead-capacitor", 10e-12, 1e-6, true)
	return parts
}

// otherValues proposes other values of the compensator's parts, the smallest change first: one part, with a little slack and with more, then two parts, then the
// whole network. All rules of the loop share what was found.
func otherValues(c *Case, _ *Finding, attempt int) (mends []Mend, more bool) {
	// What cannot be found with less slack is not looked for with more.
	foundBefore := func(ctx context.Context) bool { _, ok := c.loopProblem(slacks[1]).All(ctx); return ok }
	attempts := [...]func(context.Context) []synthesis.Answer{
		func(ctx context.Context) []synthesis.Answer { return c.loopProblem(slacks[0]).One(ctx) },
		func(ctx context.Context) []synthesis.Answer {
			if c.pointed != nil && len(c.pointed.mends[0]) == 0 {
				return nil
			}
			return c.loopProblem(slacks[1]).One(ctx)
		},
		func(ctx context.Context) []synthesis.Answer { return one(c.loopProblem(slacks[1]).Two(ctx)) },
		func(ctx context.Context) []synthesis.Answer { return one(c.loopProblem(slacks[1]).All(ctx)) },
		func(ctx context.Context) []synthesis.Answer {
			if !foundBefore(ctx) {
				return nil
			}
			return one(c.loopProblem(slacks[2]).All(ctx))
		},
		func(ctx context.Context) []synthesis.Answer {
			if !foundBefore(ctx) {
				return nil
			}
			return one(c.loopProblem(slacks[3]).All(ctx))
		},
	}
	if attempt >= len(attempts) || len(c.looseParts()) == 0 {
		return nil, false
	}
	if inner := decide(c, &slopeCompensation).Findings; len(inner) > 0 && inner[0].Severity == Error {
		return nil, false // the inner loop comes first
	}
	if c.pointed != nil && c.pointed.mends[attempt] != nil {
		return c.pointed.mends[attempt], attempt+1 < len(attempts)
	}
	const most = 3
	mends = []Mend{}
	for _, a := range attempts[attempt](context.Background()) {
		if m, ok := c.rewritten(a.Changes); ok && len(mends) < most {
			mends = append(mends, m)
		}
	}
	if c.pointed != nil {
		c.pointed.mends[attempt] = mends
	}
	return mends, attempt+1 < len(attempts)
}

func one(a synthesis.Answer, ok bool) []synthesis.Answer {
	if !ok {
		return nil
	}
	return []synthesis.Answer{a}
}

// noValues says what stands in the way when no values of the network's parts meet everything: what the best that was found still breaks, and what would help.
func noValues(c *Case, _ *Finding) string {
	if inner := decide(c, &slopeCompensation).Findings; len(inner) > 0 && inner[0].Severity == Error {
		return "the inner current loop comes first: see slope-compensation"
	}
	p := c.loopProblem(slacks[1])
	if len(p.Parts) == 0 {
		return "the compensator's values stand in a file that other designs share, or cannot be rewritten"
	}
	best, ok := p.All(context.Background())
	switch {
	case math.IsInf(best.Violation, 1):
		return ""
	case ok:
		return "values were found that hold at the extremes of quick depth, but none that hold at full depth"
	}
	d := synthesis.With(c.Design, best.Changes)
	r, err := analysis.Analyse(context.Background(), d, analysis.Options{Depth: analysis.Quick, Jobs: 1})
	if err != nil {
		return ""
	}
	tried := &Case{Spec: c.Spec, Design: d, Settings: c.Settings, Result: r, every: c.every}
	var broken []string
	worstRule, most := "", 0.0
	for _, rule := range c.every {
		if !byValues[rule.Name] {
			continue
		}
		for _, f := range decide(tried, rule).Findings {
			if f.Severity <= Note {
				continue
			}
			broken = append(broken, f.Message)
			if s := shortfall(&f); s > most {
				worstRule, most = rule.Name, s
			}
		}
	}
	if len(broken) == 0 {
		return "no values were found that hold at full depth"
	}
	return fmt.Sprintf("no values of this %s network meet everything; with the best that were found, %s. %s", c.Spec.Text("/compensator/network"), broken[0], whatWould(c, worstRule))
}

// whatWould says what helps where a rule forbids every choice of values (common practice).
func whatWould(c *Case, rule string) string {
	var ways []string
	circuit := &c.Design.Nominal.Circuit
	switch c.Design.Nominal.Network.Kind {
	case network.Type1, network.Type2:
		if circuit.Modulator.Scheme == plant.VoltageMode {
			ways = append(ways, "a type-3 network, which lifts the phase above the resonance")
		}
	}
	switch rule {
	case "rhp-zero-crossover":
		ways = append(ways, "less inductance, which moves the right-half-plane zero up", "more output capacitance, which brings the resonance down")
	case "switching-crossover", "sampling-delay":
		ways = append(ways, "a higher switching or sampling frequency")
	default:
		ways = append(ways, "more output capacitance or less of its spread")
	}
	if circuit.Modulator.Scheme == plant.VoltageMode {
		ways = append(ways, "peak current mode, which takes the resonance out of the loop")
	}
	ways = append(ways, "a slower target")
	return "What would help: " + strings.Join(ways, "; ")
}

// rewritten is the edits that give parts other nominal values; ok is false where one cannot be written into the file.
func (c *Case) rewritten(changes []analysis.Setting) (m Mend, ok bool) {
	var titles []string
	put := func(pointer string, value float64) bool {
		q, found := c.Spec.Quantity(pointer)
		if !found {
			return false
		}
		at, start, end, text, ok := schema.RewriteNominal(q, value)
		if !ok || at.Doc != c.Spec.Document {
			return false
		}
		titles = append(titles, lastKey(pointer)+" "+string(at.Doc.Text[start:end])+" → "+text)
		m.Edits = append(m.Edits, Edit{Doc: at.Doc, Pointer: pointer, Start: start, End: end, Text: text})
		return true
	}
	for _, s := range changes {
		if s.Path == synthesis.Numerator {
			for i, v := range c.Design.Nominal.Network.Numerator {
				if v != 0 && !put("/compensator/numerator/"+strconv.Itoa(i), v*s.Value) {
					return m, false
				}
			}
			continue
		}
		if !put(pointerOf(s.Path), s.Value) {
			return m, false
		}
	}
	m.Title = strings.Join(titles, ", ")
	return m, len(m.Edits) > 0
}

package rules

import (
	"fmt"
	"math"
	"math/cmplx"

	"halfplane/analysis"
	"halfplane/analysis/network"
)

const gainBandwidthPointer = "/compensator/amplifier/gain-bandwidth"

var amplifierBandwidth = Rule{
	Name:     "amplifier-bandwidth",
	Group:    Loop,
	Severity: Warning,
	Also:     []Severity{Note},
	Sentence: "The error amplifier is fast enough that its own lag at crossover is small.",
	Formula:  "arg(C ideal / C finite) at fc ≤ amplifier-phase",
	Source:   "common practice",
	Policy:   []Threshold{amplifierPhase, assumedBandwidth},
	Example:  "compensator:\n  network: type-3\n  upper-resistor: 10k\n  feedback-resistor: 22k\n  integrator-capacitor: 1n\n  lead-resistor: 330R\n  lead-capacitor: 470p\n  amplifier: {gain-bandwidth: 300 kHz}   # the loop crosses at 30 kHz",
	Hint:     "Measured is the lag that the amplifier adds at crossover; the message names the gain-bandwidth that would just do. Stated amplifier data are in every margin already; without them the loop was computed with an ideal one, which the note says.",
	Reads:    Figures,
	Place:    firstOf(gainBandwidthPointer, "/compensator/network"),
	Applies: func(c *Case) bool {
		switch c.Design.Nominal.Network.Kind {
		case network.Type1, network.Type2, network.Type3:
			return true
		}
		return false
	},
	Decide: func(c *Case) []Finding {
		if c.Spec.Has(gainBandwidthPointer) {
			return statedAmplifier(c)
		}
		return assumedAmplifier(c)
	},
}

// statedAmplifier judges the amplifier that the file states.
func statedAmplifier(c *Case) []Finding {
	limit := c.threshold(amplifierPhase)
	corner, lag := c.worst(func(k *analysis.Corner) float64 {
		return amplifierLag(c.parts(k.At), crossover(k))
	})
	if corner == nil || lag <= limit {
		return nil
	}
	fc := crossover(corner)
	f := c.atCorner(gainBandwidthPointer, corner)
	f.Message = fmt.Sprintf("the amplifier costs %s of phase at the crossover %s, limit %s; a gain-bandwidth of %s would just do",
		number(lag, "deg"), number(fc, "Hz"), number(limit, "deg"), number(sufficientBandwidth(c.parts(corner.At), fc, limit), "Hz"))
	f.Formula = fmt.Sprintf("arg(C ideal / C finite) at %s = %s", number(fc, "Hz"), number(lag, "deg"))
	f.Measured, f.Limit = asNumber(lag, "deg"), asNumber(limit, "deg")
	f.Nominal = asNumber(amplifierLag(&c.Design.Nominal.Network, crossover(c.nominal())), "deg")
	c.relate(&f, "sets the gain at crossover", gainPart(c))
	return []Finding{f}
}

// assumedAmplifier judges a network without amplifier data as if it had the assumed gain-bandwidth. The worst corner is found
// at the ideal network's crossovers and then computed with the assumed amplifier in the loop.
func assumedAmplifier(c *Case) []Finding {
	limit, assumed := c.threshold(amplifierPhase), c.threshold(assumedBandwidth)
	corner, _ := c.worst(func(k *analysis.Corner) float64 {
		parts := *c.parts(k.At)
		parts.GainBandwidth = assumed
		return amplifierLag(&parts, crossover(k))
	})
	if corner == nil {
		return nil
	}
	lag, fc := lagWith(c, corner, assumed)
	if lag <= limit {
		return nil
	}
	f := c.atCorner("/compensator/network", corner)
	f.Severity = Note
	f.Message = fmt.Sprintf("no amplifier gain-bandwidth is stated: one of %s would cost %s of phase at the crossover %s, limit %s; %s would just do",
		number(assumed, "Hz"), number(lag, "deg"), number(fc, "Hz"), number(limit, "deg"), number(sufficientBandwidth(c.parts(corner.At), fc, limit), "Hz"))
	f.Formula = fmt.Sprintf("arg(C ideal / C finite) at %s = %s", number(fc, "Hz"), number(lag, "deg"))
	f.Measured, f.Limit = asNumber(lag, "deg"), asNumber(limit, "deg")
	nominalLag, _ := lagWith(c, c.nominal(), assumed)
	f.Nominal = asNumber(nominalLag, "deg")
	c.relate(&f, "sets the gain at crossover", gainPart(c))
	return []Finding{f}
}

// lagWith is the lag (degrees) of an assumed amplifier (gain-bandwidth in Hz) at the crossover of the loop that has it.
func lagWith(c *Case, k *analysis.Corner, gainBandwidth float64) (lag, fc float64) {
	settings := append(append([]analysis.Setting(nil), k.At...), analysis.Setting{Path: "compensator.amplifier.gain-bandwidth", Value: gainBandwidth})
	with, err := analysis.At(c.Design, settings)
	if err != nil {
		return math.NaN(), math.NaN()
	}
	fc = crossover(&with)
	return amplifierLag(c.parts(settings), fc), fc
}

// assumedOpenLoopGain is that of an amplifier of which only the gain-bandwidth is known: 120 dB.
const assumedOpenLoopGain = 1e6

// amplifierLag is arg(C ideal / C finite) in degrees at a frequency (Hz): the argument of 1 + (1 + Zf/(Zi ∥ RL))/A with
// 1/A = 1/A0 + jω/ωgb. NaN without a frequency.
func amplifierLag(p *network.Parts, frequency float64) float64 {
	s := complex(0, 2*math.Pi*frequency)
	inverse := complex(1/assumedOpenLoopGain, 0)
	if p.OpenLoopGain > 0 {
		inverse = complex(1/p.OpenLoopGain, 0)
	}
	if p.GainBandwidth > 0 {
		inverse += s / complex(2*math.Pi*p.GainBandwidth, 0)
	}
	input := 1 / complex(p.UpperResistor, 0)
	if p.LeadCapacitor > 0 {
		input += 1 / (complex(p.LeadResistor, 0) + 1/(s*complex(p.LeadCapacitor, 0)))
	}
	if p.LowerResistor > 0 {
		input += 1 / complex(p.LowerResistor, 0)
	}
	feedback := 1 / (complex(p.FeedbackResistor, 0) + 1/(s*complex(p.IntegratorCapacitor, 0)))
	if p.RolloffCapacitor > 0 {
		feedback += s * complex(p.RolloffCapacitor, 0)
	}
	return cmplx.Phase(1+(1+input/feedback)*inverse) * 180 / math.Pi
}

// sufficientBandwidth is the gain-bandwidth (Hz) whose lag at a crossover just meets the limit, by bisection over nine decades;
// the lag falls as the amplifier gets faster.
func sufficientBandwidth(parts *network.Parts, fc, limit float64) float64 {
	p := *parts
	low, high := math.Log(fc), math.Log(fc)+9*math.Ln10
	for range 60 {
		middle := (low + high) / 2
		p.GainBandwidth = math.Exp(middle)
		if amplifierLag(&p, fc) > limit {
			low = middle
		} else {
			high = middle
		}
	}
	return math.Exp(high)
}

package rules

import (
	"fmt"
	"math"
	"math/cmplx"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/transfer"
)

const gainBandwidthPointer = "/compensator/amplifier/gain-bandwidth"

var amplifierBandwidth = Rule{
	Name:     "amplifier-bandwidth",
	Group:    Loop,
	Severity: Warning,
	Sentence: "The error amplifier is fast enough that its own lag at crossover is small.",
	Formula:  "arg(C ideal / C finite) at fc <= amplifier-phase",
	Source:   "common practice",
	Policy:   []Threshold{amplifierPhase, assumedBandwidth},
	Example:  "compensator: {network: type-3, amplifier: {gain-bandwidth: 300 kHz}, …}   # crosses at 30 kHz",
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
		p := c.point(k.At)
		return amplifierLag(&p.Network, crossover(k))
	})
	if corner == nil || lag <= limit {
		return nil
	}
	fc := crossover(corner)
	p := c.point(corner.At)
	f := c.atCorner(gainBandwidthPointer, corner)
	f.Message = fmt.Sprintf("the amplifier costs %s of phase at the crossover %s, limit %s; a gain-bandwidth of %s would just do",
		number(lag, "deg"), number(fc, "Hz"), number(limit, "deg"), number(sufficientBandwidth(&p.Network, fc, limit), "Hz"))
	f.Formula = fmt.Sprintf("arg(C ideal / C finite) at %s = %s", number(fc, "Hz"), number(lag, "deg"))
	f.Measured, f.Limit = asNumber(lag, "deg"), asNumber(limit, "deg")
	f.Nominal = asNumber(amplifierLag(&c.Design.Nominal.Network, crossover(c.nominal())), "deg")
	return []Finding{f}
}

// assumedAmplifier judges a network without amplifier data as if it had the assumed gain-bandwidth. The worst corner is found
// at the ideal network's crossovers and then computed with the assumed amplifier in the loop.
func assumedAmplifier(c *Case) []Finding {
	limit, assumed := c.threshold(amplifierPhase), c.threshold(assumedBandwidth)
	withAmplifier := func(k *analysis.Corner) network.Parts {
		p := c.point(k.At)
		p.Network.GainBandwidth = assumed
		return p.Network
	}
	corner, _ := c.worst(func(k *analysis.Corner) float64 {
		parts := withAmplifier(k)
		return amplifierLag(&parts, crossover(k))
	})
	if corner == nil {
		return nil
	}
	lag, fc := lagWith(c, corner, assumed)
	if lag <= limit {
		return nil
	}
	parts := withAmplifier(corner)
	f := c.atCorner("/compensator/network", corner)
	f.Severity = Note
	f.Message = fmt.Sprintf("no amplifier gain-bandwidth is stated: one of %s would cost %s of phase at the crossover %s, limit %s; %s would just do",
		number(assumed, "Hz"), number(lag, "deg"), number(fc, "Hz"), number(limit, "deg"), number(sufficientBandwidth(&parts, fc, limit), "Hz"))
	f.Formula = fmt.Sprintf("arg(C ideal / C finite) at %s = %s", number(fc, "Hz"), number(lag, "deg"))
	f.Measured, f.Limit = asNumber(lag, "deg"), asNumber(limit, "deg")
	nominalLag, _ := lagWith(c, c.nominal(), assumed)
	f.Nominal = asNumber(nominalLag, "deg")
	return []Finding{f}
}

// lagWith is the lag (degrees) of an assumed amplifier (gain-bandwidth in Hz) at the crossover of the loop that has it.
func lagWith(c *Case, k *analysis.Corner, gainBandwidth float64) (lag, fc float64) {
	settings := append(append([]analysis.Setting(nil), k.At...), analysis.Setting{Path: "compensator.amplifier.gain-bandwidth", Value: gainBandwidth})
	with, err := analysis.At(c.Design, settings)
	if err != nil {
		return math.NaN(), math.NaN()
	}
	p := c.point(settings)
	fc = crossover(&with)
	return amplifierLag(&p.Network, fc), fc
}

// amplifierLag is arg(C ideal / C finite) in degrees at a frequency (Hz), NaN where it cannot be computed.
func amplifierLag(parts *network.Parts, frequency float64) float64 {
	var ideal, finite transfer.Product
	if math.IsNaN(frequency) || network.BuildIdeal(parts, &ideal) != nil || network.Build(parts, &finite) != nil {
		return math.NaN()
	}
	omega := 2 * math.Pi * frequency
	return cmplx.Phase(ideal.At(omega)/finite.At(omega)) * 180 / math.Pi
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

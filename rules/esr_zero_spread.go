package rules

import (
	"fmt"
	"math"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/transfer"
	"halfplane/schema"
)

var esrZeroSpread = Rule{
	Name:     "esr-zero-spread",
	Group:    Plant,
	Severity: Note,
	Sentence: "An output-capacitor zero that a compensator pole is meant to cancel stays near that pole over its spread.",
	Formula:  "pole / esr-spread ≤ 1/(2π · ESR · C) ≤ pole · esr-spread, where the nominal zero lies below 5 · fc",
	Source:   "common practice",
	Policy:   []Threshold{esrSpread},
	Example:  "output-capacitor: {capacitance: 220 uF ± 20 %, esr: {min: 8 mΩ, nominal: 40 mΩ, max: 160 mΩ}}   # the zero moves by 20 to 1, the pole stays",
	Hint:     "Measured is the end of the zero's range further from the pole. Uncancelled it bends the loop's phase and gain near crossover: see the margins at that corner.",
	Reads:    Declaration,
	Place:    func(c *Case) string { return largestBank(c).pointer + "/esr" },
	Applies: func(c *Case) bool {
		_, _, _, applies := esrZeroAndPole(c)
		return applies
	},
	Decide: func(c *Case) []Finding {
		bank, zero, pole, _ := esrZeroAndPole(c)
		factor := c.threshold(esrSpread)
		low, high := esrZeroExtremes(c, bank, zero)
		worst, which := low, [2]bool{true, true}
		if distance(high, pole) > distance(low, pole) {
			worst, which = high, [2]bool{false, false}
		}
		if distance(worst, pole) <= factor {
			return nil
		}
		f := c.at(bank.pointer + "/esr")
		f.Corner = esrCorner(c, bank, which[0])
		limit := pole * factor
		if worst < pole {
			limit = pole / factor
		}
		f.Message = fmt.Sprintf("the output capacitor's ESR zero spreads from %s to %s, further than a factor of %s from the compensator's pole at %s (limit %s)",
			number(low, "Hz"), number(high, "Hz"), short(factor), number(pole, "Hz"), number(limit, "Hz"))
		f.Formula = fmt.Sprintf("%s / %s = %s; at most %s", number(math.Max(worst, pole), "Hz"), number(math.Min(worst, pole), "Hz"), short(distance(worst, pole)), short(factor))
		f.Measured, f.Limit, f.Nominal = asNumber(worst, "Hz"), asNumber(limit, "Hz"), asNumber(zero, "Hz")
		c.relate(&f, "decides the zero", bank.pointer+"/capacitance")
		c.relate(&f, "sets the pole", "/compensator/rolloff-capacitor", "/compensator/lead-resistor", "/compensator/poles")
		return []Finding{f}
	},
}

// largestBank is the output capacitor bank with the largest total capacitance.
func largestBank(c *Case) bankPlace {
	all, circuit := banks(c), &c.Design.Nominal.Circuit
	found := all[0]
	for _, bank := range all[1:] {
		if total(circuit.Banks[bank.index].Capacitance, circuit.Banks[bank.index].Count) >
			total(circuit.Banks[found.index].Capacitance, circuit.Banks[found.index].Count) {
			found = bank
		}
	}
	return found
}

func total(one, count float64) float64 { return one * count }

// esrZeroAndPole finds the nominal ESR zero of the largest bank and the compensator pole nearest to it (Hz); applies is false
// where the zero is too high to matter or no pole is near it.
func esrZeroAndPole(c *Case) (bank bankPlace, zero, pole float64, applies bool) {
	bank = largestBank(c)
	zero = bankZero(c, bank)
	if !(zero < 5*crossover(c.nominal())) {
		return bank, zero, math.NaN(), false
	}
	var product transfer.Product
	if network.BuildIdeal(&c.Design.Nominal.Network, &product) != nil {
		return bank, zero, math.NaN(), false
	}
	var poles []float64
	for _, p := range product.Poles {
		poles = append(poles, math.Hypot(real(p), imag(p))/(2*math.Pi))
	}
	pole = nearest(poles, zero)
	return bank, zero, pole, distance(pole, zero) <= c.threshold(esrSpread)
}

// bankZero is a bank's nominal ESR zero (Hz), +Inf without ESR. Pieces in parallel do not move it; bias derating does.
func bankZero(c *Case, bank bankPlace) float64 {
	circuit := c.Design.Nominal.Circuit
	b := circuit.Banks[bank.index]
	if b.ESR == 0 {
		return math.Inf(1)
	}
	return 1 / (2 * math.Pi * b.ESR * b.Capacitance * derated(c, bank))
}

// derated is the factor that bias leaves of a bank's capacitance: the stage's capacitance with this bank alone over its written one.
func derated(c *Case, bank bankPlace) float64 {
	b := c.Design.Nominal.Circuit.Banks[bank.index]
	if len(b.Derating) == 0 {
		return 1
	}
	factor, volts := b.Derating[0].Factor, c.Design.Nominal.Circuit.OutputVoltage
	for i := 1; i < len(b.Derating); i++ {
		low, high := b.Derating[i-1], b.Derating[i]
		if volts >= high.Voltage {
			factor = high.Factor
		} else if volts > low.Voltage {
			factor = low.Factor + (high.Factor-low.Factor)*(volts-low.Voltage)/(high.Voltage-low.Voltage)
		}
	}
	return factor
}

// esrZeroExtremes are the lowest and highest zero (Hz) over the spreads of ESR and capacitance.
func esrZeroExtremes(c *Case, bank bankPlace, nominal float64) (low, high float64) {
	esr, _ := c.Spec.Quantity(bank.pointer + "/esr")
	capacitance, _ := c.Spec.Quantity(bank.pointer + "/capacitance")
	scale := func(r, f float64) float64 { return nominal * (esr.Nominal / r) * (capacitance.Nominal / f) }
	return scale(esr.Max, capacitance.Max), scale(esr.Min, capacitance.Min)
}

// esrCorner is the nominal corner with a bank's ESR and capacitance at their highest (the lowest zero) or lowest.
func esrCorner(c *Case, bank bankPlace, highest bool) []analysis.Setting {
	corner := append([]analysis.Setting(nil), c.nominal().At...)
	for i, s := range corner {
		pointer := pointerOf(s.Path)
		if pointer != bank.pointer+"/esr" && pointer != bank.pointer+"/capacitance" {
			continue
		}
		q, _ := c.Spec.Quantity(pointer)
		corner[i].Value = extreme(q, highest)
	}
	return corner
}

func extreme(q schema.Quantity, highest bool) float64 {
	if highest {
		return q.Max
	}
	return q.Min
}

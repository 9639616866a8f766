package rules

import (
	"fmt"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

var capacitorRippleCurrent = Rule{
	Name:     "capacitor-ripple-current",
	Group:    Operating,
	Severity: Warning,
	Sentence: "The ripple current of one output capacitor stays within its rating at every corner.",
	Formula:  "√(2·Σ|Ik|²)/count ≤ ripple-current-rating, Ik the harmonics of the current into the bank",
	Source:   "common practice (Fourier series of the piecewise-linear output current, shared by the banks' admittances)",
	Example:  "topology: boost\noutput-capacitor: {capacitance: 220 uF ± 20 %, esr: 20 mΩ, count: 2, ripple-current-rating: 0.9 A}   # 1.6 A rms a piece at low input",
	Hint:     "Measured is the current of one piece. Banks of different kinds share the current by their admittance at each harmonic, so that a film capacitor beside an electrolytic takes most of it.",
	Reads:    Operation,
	Applies:  func(c *Case) bool { return len(ratedBanks(c)) > 0 },
	Decide: func(c *Case) []Finding {
		var findings []Finding
		for _, bank := range ratedBanks(c) {
			pointer := bank.pointer + "/ripple-current-rating"
			q, _ := c.Spec.Quantity(pointer)
			corner, amps := c.worstStage(func(k *analysis.Corner) float64 { return pieceCurrent(c, k, bank.index) })
			if corner == nil || amps <= q.Min {
				continue
			}
			f := c.atCorner(pointer, corner)
			f.Message = fmt.Sprintf("one output capacitor carries %s rms, above its rating of %s", number(amps, "A"), number(q.Min, "A"))
			f.Formula = fmt.Sprintf("√(2·Σ|Ik|²)/%s = %s; at most %s", short(c.Design.Nominal.Circuit.Banks[bank.index].Count), number(amps, "A"), number(q.Min, "A"))
			f.Measured, f.Limit, f.Nominal = asNumber(amps, "A"), asNumber(q.Min, "A"), asNumber(pieceCurrent(c, c.nominal(), bank.index), "A")
			c.relate(&f, "decides the ripple current", "/load/current", "/input-voltage", bank.pointer+"/count", "/inductor/inductance")
			findings = append(findings, f)
		}
		return findings
	},
}

type bankPlace struct {
	pointer string
	index   int
}

// banks are the places of the output capacitor banks, in the circuit's order.
func banks(c *Case) []bankPlace {
	if c.Spec.Has("/output-capacitor") {
		return []bankPlace{{"/output-capacitor", 0}}
	}
	var all []bankPlace
	for i := range c.Design.Nominal.Circuit.Banks {
		all = append(all, bankPlace{fmt.Sprintf("/output-capacitors/%d", i), i})
	}
	return all
}

func ratedBanks(c *Case) []bankPlace {
	var rated []bankPlace
	for _, bank := range banks(c) {
		if c.Spec.Has(bank.pointer + "/ripple-current-rating") {
			rated = append(rated, bank)
		}
	}
	return rated
}

// pieceCurrent is the rms ripple current (A) of one piece of a bank at a corner.
func pieceCurrent(c *Case, k *analysis.Corner, bank int) float64 {
	return atReached(k, func() float64 {
		return plant.PieceCurrents(c.circuit(k.At), &k.Plant)[bank]
	})
}

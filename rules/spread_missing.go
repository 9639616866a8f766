package rules

import (
	"fmt"
	"strings"

	"halfplane/schema"
)

var spreadMissing = Rule{
	Name:     "spread-missing",
	Group:    Declared,
	Severity: Note,
	Sentence: "Every value that decides the loop and is loose in practice states a tolerance or a range.",
	Formula:  "inductance, capacitance, ESR, current transfer ratio, ramp, current-sense gain and transconductance have a spread",
	Source:   "common practice",
	Example:  "output-capacitor: {capacitance: 220 uF, esr: 12 mΩ}   # ± 20 %, and 8 to 25 mΩ over temperature and life",
	Hint:     "One note for each file, at the first such value; the others are related. The worst corner is only as honest as the spreads: a value without one is taken as exact.",
	Reads:    Declaration,
	Decide: func(c *Case) []Finding {
		var bare []string
		c.Spec.Quantities(func(pointer string, q schema.Quantity) {
			if !q.Spread && q.Nominal != 0 && isLoose(pointer) {
				bare = append(bare, pointer)
			}
		})
		if len(bare) == 0 {
			return nil
		}
		f := c.at(bare[0])
		var names []string
		for _, pointer := range bare {
			names = append(names, placeWords(pointer))
		}
		f.Message = fmt.Sprintf("no tolerance or range is given for %s: every corner takes the nominal value", andList(names))
		c.relate(&f, "has no tolerance or range", bare[1:]...)
		return []Finding{f}
	},
}

// isLoose says whether a value spreads from piece to piece, with temperature or with age, so that its nominal value alone
// says little.
func isLoose(pointer string) bool {
	steps := strings.Split(pointer, "/")
	last := steps[len(steps)-1]
	switch owner := steps[1]; owner {
	case "inductor", "second-inductor", "coupling-capacitor", "output-capacitor", "output-capacitors", "input-filter":
		return last == "inductance" || last == "capacitance" || last == "esr" || last == "damping-capacitance"
	case "magnetizing-inductance":
		return true
	case "modulator":
		return last == "ramp-amplitude" || last == "current-sense-gain"
	case "compensator":
		return len(steps) == 3 && (last == "current-transfer-ratio" || last == "transconductance")
	}
	return false
}

// andList is "a, b and c".
func andList(words []string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " and " + words[len(words)-1]
}

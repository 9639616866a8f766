package report

import (
	"strings"

	"halfplane/rules"
	"halfplane/schema"
)

// mendWords is a repair in one line: "feedback-resistor 47k → 24k: crossover 2.50 kHz, phase margin 56.1°".
func mendWords(m rules.Mend) string {
	units := map[string]string{"crossover": "Hz", "phase-margin": "deg", "gain-margin": "dB", "modulus-margin": ""}
	var after []string
	for _, s := range m.After {
		if unit, known := units[s.Path]; known && !strings.HasPrefix(m.Title, s.Path+" ") {
			after = append(after, strings.ReplaceAll(s.Path, "-", " ")+" "+schema.Format(s.Value, unit))
		}
	}
	if len(after) == 0 {
		return m.Title
	}
	return m.Title + ": " + strings.Join(after, ", ")
}

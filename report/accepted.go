package report

import (
	"math"

	"halfplane/rules"
	"halfplane/schema"
)

// unrecorded is the findings without those that a ledger has on record.
func unrecorded(all []rules.Finding) []rules.Finding {
	live := make([]rules.Finding, 0, len(all))
	for _, f := range all {
		if !f.Recorded {
			live = append(live, f)
		}
	}
	return live
}

// accepted says why a finding does not count for the gate, "" where it does.
func accepted(f rules.Finding) string {
	switch {
	case f.Waiver != nil:
		return "waived until " + f.Waiver.Until + ": " + f.Waiver.Reason
	case f.Recorded:
		return "on record in the ledger"
	}
	return ""
}

// recordWords says what is on record of a finding that got worse.
func recordWords(r *rules.Record) string {
	words := "worse than on record: " + r.Severity.String()
	if !math.IsNaN(r.Measured) {
		words += ", " + schema.Format(r.Measured, r.Unit)
		if !math.IsNaN(r.Limit) {
			words += " against " + schema.Format(r.Limit, r.Unit)
		}
	}
	return words
}

package rules

import (
	"slices"

	"halfplane/analysis"
	"halfplane/analysis/plant"
	"halfplane/schema"
)

// One cause gives one error. A finding follows from another when it goes away with the other's cause: the question is put
// to the rule itself, on the same analysis without what the cause touches.

// tieCauses points consequences at the finding that they follow from, and lets go of causes that are not in the list.
func tieCauses(c *Case, findings []Finding) {
	causes := []func(*Finding) string{followsInstability(findings), followsReach(c, findings), followsSlope(c, findings), followsFilter(c, findings), followsResonance(c, findings)}
	for i := range findings {
		f := &findings[i]
		cause := ""
		if f.Cause != nil { // the rule knows better
			cause = f.Cause.Rule
		}
		f.Cause = nil
		for _, follows := range causes {
			if cause == "" {
				cause = follows(f)
			}
		}
		at := slices.IndexFunc(findings, func(g Finding) bool { return g.Rule == cause })
		if cause == "" || at < 0 || at == i {
			continue
		}
		f.Cause = &Cause{Rule: cause, Pointer: findings[at].Pointer}
		f.Related = append(f.Related, schema.Related{
			Doc: findings[at].Doc, Pointer: findings[at].Pointer, Start: findings[at].Start, End: findings[at].End,
			Message: "follows from " + cause,
		})
	}
}

// broken is a rule's finding in the list, nil if there is none.
func broken(findings []Finding, rule *Rule) *Finding {
	if i := slices.IndexFunc(findings, func(f Finding) bool { return f.Rule == rule.Name }); i >= 0 {
		return &findings[i]
	}
	return nil
}

// followsInstability: at the corner where the closed loop is unstable the margins are broken with it.
func followsInstability(findings []Finding) func(*Finding) string {
	cause := broken(findings, &closedLoopStability)
	return func(f *Finding) string {
		switch f.Rule {
		case phaseMargin.Name, gainMargin.Name, modulusMargin.Name:
			if cause != nil && sameCorner(f.Corner, cause.Corner) {
				return cause.Rule
			}
		}
		return ""
	}
}

// followsReach: where the output voltage cannot be reached at some corner, the corners beside it run at the edge of what the
// stage can do. What such a corner breaks and no operating corner with nominal parts does follows from duty-range.
func followsReach(c *Case, findings []Finding) func(*Finding) string {
	cause := broken(findings, &dutyRange)
	if cause == nil || !slices.ContainsFunc(c.Result.Corners, func(k analysis.Corner) bool { return !k.Reached }) {
		return func(*Finding) string { return "" }
	}
	i := 0
	operating := c.keeping(func(*analysis.Corner) bool { i++; return i <= c.Result.Operating+1 })
	return func(f *Finding) string {
		if rule := Find(f.Rule); rule != &dutyRange && rule.Reads > Declaration && f.Severity <= cause.Severity && rule.quiet(operating) {
			return cause.Rule
		}
		return ""
	}
}

// followsSlope: an inner current loop that doubles its period, or nearly does, peaks at half the filter's frequency and takes
// every figure of the outer loop with it.
func followsSlope(c *Case, findings []Finding) func(*Finding) string {
	cause := broken(findings, &slopeCompensation)
	if cause == nil || cause.Severity != Error {
		return func(*Finding) string { return "" }
	}
	damped := c.keeping(func(k *analysis.Corner) bool {
		if !hasCurrentLoop(k) {
			return true
		}
		q := k.Plant.Current.HalfFrequencyQuality
		return q > 0 && q <= c.threshold(halfQualityHigh)
	})
	return func(f *Finding) string {
		if rule := Find(f.Rule); rule.Reads == Figures && f.Severity >= Warning && rule.quiet(damped) {
			return cause.Rule
		}
		return ""
	}
}

// followsFilter: what the loop without the input filter does not show at the same corner follows from the filter.
func followsFilter(c *Case, findings []Finding) func(*Finding) string {
	cause := broken(findings, &inputFilter)
	if cause == nil {
		return func(*Finding) string { return "" }
	}
	bare := *c.Design
	bare.Nominal.Circuit.Filter = plant.Filter{}
	return func(f *Finding) string {
		rule := Find(f.Rule)
		if rule.Reads != Figures || f.Severity > cause.Severity || f.Corner == nil {
			return ""
		}
		without, err := analysis.At(&bare, withoutFilter(f.Corner))
		if err == nil && without.Loop != nil &&
			rule.quiet(&Case{Spec: c.Spec, Design: &bare, Settings: c.Settings, Result: &analysis.Result{Corners: []analysis.Corner{without}, Worst: c.Result.Worst}}) {
			return cause.Rule
		}
		return ""
	}
}

// followsResonance: a sharp resonance that reaches through one makes crossovers of its own.
func followsResonance(c *Case, findings []Finding) func(*Finding) string {
	cause := broken(findings, &resonanceCrossover)
	return func(f *Finding) string {
		if cause == nil || f.Rule != severalCrossovers.Name || f.Severity > cause.Severity {
			return ""
		}
		clearance := c.threshold(resonanceClearance)
		clear := c.keeping(func(k *analysis.Corner) bool {
			return !sharpResonance(k) || k.Loop == nil || !(distance(nearest(k.Loop.Crossovers, k.Plant.Resonance), k.Plant.Resonance) < clearance)
		})
		if severalCrossovers.quiet(clear) {
			return cause.Rule
		}
		return ""
	}
}

// keeping is the case with only some corners left to judge: the others are as if they had not been reached. Nominal keeps
// its place.
func (c *Case) keeping(keep func(*analysis.Corner) bool) *Case {
	result := *c.Result
	result.Corners = slices.Clone(c.Result.Corners)
	for i := range result.Corners {
		if k := &result.Corners[i]; !keep(k) {
			*k = analysis.Corner{At: k.At, Ideal: k.Ideal, DutyPeak: k.DutyPeak}
		}
	}
	return &Case{Spec: c.Spec, Design: c.Design, Result: &result, Settings: c.Settings, stages: c.stages, pointed: c.pointed}
}

// quiet says whether a rule has nothing to say about a case. A rule that fails on it says nothing about causes either.
func (r *Rule) quiet(c *Case) (quiet bool) {
	defer func() {
		if recover() != nil {
			quiet = false
		}
	}()
	return r.Decide != nil && len(r.Decide(c)) == 0
}

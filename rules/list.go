package rules

// list is every rule, in the order of the catalogue. A rule that is not here does not exist.
var list = []*Rule{
	// declared
	&specSyntax, &specShape, &quantity, &assumedNominal, &turnsRatio, &reflectedInductance, &dividerSetpoint,
	// operating
	&dutyRange,
	// plant
	&rhpZeroCrossover, &resonanceCrossover, &switchingCrossover,
	// loop
	&closedLoopStability, &phaseMargin, &gainMargin, &modulusMargin, &crossoverRange,
	// keeping
	&notAssessed, &internal,
}

// All is every rule, in the order of the catalogue.
func All() []*Rule { return append([]*Rule(nil), list...) }

// Find is the rule of that name, nil if there is none.
func Find(name string) *Rule {
	for _, rule := range list {
		if rule.Name == name {
			return rule
		}
	}
	return nil
}

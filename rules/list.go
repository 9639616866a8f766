package rules

// list is every rule, in the order of the catalogue. A rule that is not here does not exist.
var list = []*Rule{
	// declared
	&specSyntax, &specShape, &quantity, &assumedNominal, &plausibleSize, &turnsRatio, &reflectedInductance,
	&statedFigureRule, &dividerSetpoint, &preferredValue, &spreadMissing, &biasDerating,
	// operating
	&dutyRange, &dutyLatch, &conductionMode, &inductorSaturation, &inductorRipple, &switchVoltage, &rectifierVoltage,
	&switchCurrent, &capacitorRippleCurrent, &outputRipple,
	// plant
	&rhpZeroCrossover, &crossoverWindow, &resonanceCrossover, &switchingCrossover, &esrZeroSpread, &slopeCompensation,
	&inputFilter, &inputFilterDamping,
	// loop
	&closedLoopStability, &phaseMargin, &gainMargin, &modulusMargin, &conditionalStability, &severalCrossovers,
	&crossoverRange, &lowFrequencyGain, &comparatorRipple, &amplifierBandwidth, &samplingDelay, &optocouplerPole,
	// keeping
	&waiverExpired, &waiverUnused, &waiverUnknown, &notAssessed, &internal,
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

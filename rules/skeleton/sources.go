package main

import "strings"

// ruleSource is a rule that compiles and never finds anything, with every part of its declaration in place.
func ruleSource(group, name string) string {
	return strings.NewReplacer("VARIABLE", variable(name), "NAME", name, "GROUP", strings.ToUpper(group[:1])+group[1:]).Replace(`package rules

var VARIABLE = Rule{
	Name:     "NAME",
	Group:    GROUP,
	Severity: Warning,
	Sentence: "What good looks like, in one sentence.",
	Formula:  "measured <= limit",
	Source:   "common practice",
	Example:  "inductor: {inductance: 22 uH}   # what is wrong with it",
	Hint:     "Measured is …, the limit …; what helps.",
	Reads:    Figures,
	Place:    gainPart,
	Applies:  func(*Case) bool { return true },
	Needs:    []string{"/compensator", "/inductor/inductance"},
	Decide: func(*Case) []Finding {
		return nil // state the pass first: if got <= limit { return nil }
	},
}
`)
}

// specSource is a healthy design, with the given mark on the inductor's line.
func specSource(mark string) string {
	return `format: 1
title: Tide gauge boost
topology: boost
switching-frequency: 250 kHz
input-voltage: {min: 9 V, nominal: 12 V, max: 16 V}
output-voltage: 24 V
load: {current: {min: 0.2 A, nominal: 1 A, max: 1.5 A}}
inductor:
  resistance: 25 mΩ
  inductance: 22 uH ± 20 %` + mark + `
output-capacitor: {capacitance: 220 uF ± 20 %, esr: {min: 8 mΩ, nominal: 12 mΩ, max: 25 mΩ}, count: 2}
switch: {on-resistance: 15 mΩ}
rectifier: {resistance: 12 mΩ, synchronous: true}
modulator: {scheme: voltage-mode, ramp-amplitude: 1.8 V, duty-limit: {min: 0, max: 0.8}}
compensator:
  network: type-3
  reference-voltage: 1.25 V
  upper-resistor: 100k ± 1 %
  lower-resistor: 5k49 ± 1 %
  feedback-resistor: 7k87 ± 1 %
  integrator-capacitor: 39n ± 5 %
  rolloff-capacitor: 1n ± 5 %
  lead-resistor: 2k05 ± 1 %
  lead-capacitor: 2n7 ± 5 %
  amplifier: {gain-bandwidth: 10 MHz, open-loop-gain: 90 dB}
targets: {phase-margin: 45 deg, gain-margin: 8 dB}
`
}

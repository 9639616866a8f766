package main

// exhibit is one file of the demonstration shelf.
type exhibit struct {
	file  string
	rule  string // the rule that its one planted defect breaks; empty: healthy
	story string // what was done to it, or what is worth a look
}

// exhibits lists the shelf in the order in which it is shown.
func exhibits() []exhibit {
	return []exhibit{
		{"buoy-telemetry.converter.json", "", "A type-2 network that leans on the zero of an electrolytic capacitor, over the whole spread of its resistance."},
		{"camera-lamp.converter.yaml", "duty-range", "The controller's duty stop was chosen at the nominal battery voltage; an empty battery needs more."},
		{"cell-heater.converter.yaml", "", "A plain integrator, slow on purpose: it crosses far below the resonance."},
		{"drifter.converter.yaml", "switching-crossover", "The gain was raised on the bench until the load step looked good."},
		{"echo-sounder.converter.yaml", "phase-margin", "The lead capacitor was halved to quieten the control voltage, and its phase went with it."},
		{"float-valve.converter.yaml", "quantity", "Someone wrote farads for henries."},
		{"hydrophone.converter.yaml", "reflected-inductance", "The design note took the primary winding's inductance for the secondary's."},
		{"profiler.converter.yaml", "rhp-zero-crossover", "A larger inductor went in and pulled the right-half-plane zero down; the compensator stayed as it was."},
		{"salinity-chain.converter.yaml", "divider-setpoint", "The lower divider resistor is the neighbour of the one on the calculation sheet."},
		{"sampler-hoist.converter.yaml", "turns-ratio", "The design note divided primary turns by secondary turns."},
		{"skiff-light.converter.yaml", "", "A boost that crosses well below its right-half-plane zero, at an empty battery too."},
		{"sonde.converter.yaml", "", "A negative rail: an inverting buck-boost."},
		{"tide-gauge.converter.yaml", "", "A plain 5 V rail with a type-3 network."},
		{"turbine-log.converter.yaml", "", "A compensator that is given by gain, zeros and poles, with the modulator's delay counted."},
	}
}

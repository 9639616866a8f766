package plant

import "math"

// maxBranches bounds the resistor–capacitor branches at one node: the banks and the load's own capacitance.
const maxBranches = MaxBanks + 1

// Branch is a capacitor C (F) in series with R (Ω).
type Branch struct{ C, R float64 }

// Interval holds the coefficients of a single-inductor stage during one part of the period (theory sheet section 2):
//
//	L di/dt = A·m·vt − B·vo − R·i − C·VF,  current into the output node B·i, current drawn from the input A·m·i
type Interval struct{ A, B, R, C float64 }

// Stage is a circuit seen from the output side as one equivalent phase: the transformer is gone, N phases are one with L/N and
// the total current, capacitors are derated and gathered.
type Stage struct {
	Family          Family
	Turns           float64 // n = secondary/primary, 1 where not isolated
	Drive           float64 // m: volts at the filter per volt of input while driven
	Phases          float64
	Period          float64 // s, of the output filter
	FilterFrequency float64 // Hz
	Input           float64 // V, as it is (primary side)
	Output          float64 // V
	Load            float64 // A
	Conductance     float64 // S, small-signal, of the load
	Drop            float64 // V, of the rectifier
	Inductance      float64 // H
	On, Off         Interval

	// Two-inductor topologies. Inductance is then both in parallel.
	First, Second                         Winding
	Coupling                              Branch
	SwitchResistance, RectifierResistance float64 // Ω

	branches    [maxBranches]Branch
	branchCount int

	HasFilter        bool
	FilterInductor   Winding
	shunts           [2]Branch
	shuntCount       int
	Sense            float64 // Ω, volts at the comparator per ampere of the equivalent phase
	MagnetizingSlope float64 // V/s at the comparator per volt of input, from the transformer's magnetizing current
}

// Reflect refers a circuit to its output side. It is the only place where turns, counts of phases and pieces, and bias
// deratings are applied. Voltage crosses with n, current with 1/n, resistance and inductance with n² (a capacitance would with 1/n²; no
// format field holds one on the primary behind the switches). It expects a circuit that Solve's checks accept.
func Reflect(c *Circuit) Stage {
	var s Stage
	s.Family = c.Topology.Family()
	s.Phases = float64(c.Phases)
	s.FilterFrequency = c.SwitchingFrequency * c.Topology.FilterMultiple()
	s.Period = 1 / s.FilterFrequency
	s.Input, s.Output, s.Load = c.InputVoltage, c.OutputVoltage, c.LoadCurrent
	s.Drop = c.RectifierDrop
	switch c.Behaviour {
	case Resistive:
		s.Conductance = c.LoadCurrent / c.OutputVoltage
	case ConstantPower:
		s.Conductance = -c.LoadCurrent / c.OutputVoltage
	}
	s.Turns, s.Drive = 1, 1
	if c.Topology.Isolated() {
		s.Turns = c.TurnsSecondary / c.TurnsPrimary
		s.Drive = s.Turns
		if c.Topology == HalfBridge {
			s.Drive = s.Turns / 2
		}
	}
	n2 := s.Turns * s.Turns
	ron, rd := n2*c.SwitchResistance/s.Phases, c.RectifierResistance/s.Phases
	winding := c.Inductor
	if c.Topology.Isolated() && c.InductorOnPrimary {
		winding.Inductance *= n2
		winding.Resistance *= n2
	}
	s.First = Winding{winding.Inductance / s.Phases, winding.Resistance / s.Phases}
	s.Inductance = s.First.Inductance
	if c.Topology.TwoInductor() {
		s.reflectSecond(c, ron, rd)
	} else {
		s.On, s.Off = intervals(c.Topology, s.First.Resistance, ron, rd)
	}
	s.Sense = s.Turns * c.Modulator.CurrentSenseGain / s.Phases
	if c.MagnetizingInductance > 0 && c.Topology.rectified() {
		// Sensed on the primary, where the magnetizing current flows: no turns. A half-bridge has half of the input across its primary.
		s.MagnetizingSlope = c.Modulator.CurrentSenseGain / c.MagnetizingInductance * s.Drive / s.Turns
	}
	s.gatherBanks(c)
	s.gatherFilter(&c.Filter)
	return s
}

// intervals returns the two intervals of a single-inductor topology (table in section 2 of the theory sheet).
func intervals(t Topology, rl, ron, rd float64) (on, off Interval) {
	switch {
	case t.rectified():
		return Interval{1, 1, rl + ron + rd, 1}, Interval{0, 1, rl + rd, 1}
	case t == Buck:
		return Interval{1, 1, rl + ron, 0}, Interval{0, 1, rl + rd, 1}
	case t == Boost:
		return Interval{1, 0, rl + ron, 0}, Interval{1, 1, rl + rd, 1}
	case t == IsolatedBoost:
		return Interval{1, 0, rl + ron, 0}, Interval{1, 1, rl + rd + ron, 1}
	default:
		return Interval{1, 0, rl + ron, 0}, Interval{0, 1, rl + rd, 1}
	}
}

// reflectSecond fills the parts of a two-inductor topology. Every interleaved phase has its own coupling capacitor: it is the only
// path of that phase's current.
func (s *Stage) reflectSecond(c *Circuit, ron, rd float64) {
	s.Second = Winding{c.SecondInductor.Inductance / s.Phases, c.SecondInductor.Resistance / s.Phases}
	s.Inductance = 1 / (1/s.First.Inductance + 1/s.Second.Inductance)
	s.SwitchResistance, s.RectifierResistance = ron, rd
	bias := ofFamily(s.Family, c.InputVoltage, c.InputVoltage+c.OutputVoltage, c.OutputVoltage)
	count := c.Coupling.Count
	if count == 0 {
		count = 1
	}
	count *= s.Phases
	s.Coupling = Branch{count * c.Coupling.Capacitance * derating(c.Coupling.Derating, bias), c.Coupling.ESR / count}
}

// ofFamily picks the value of the two-inductor family.
func ofFamily(f Family, sepic, cuk, zeta float64) float64 {
	switch f {
	case SepicLike:
		return sepic
	case CukLike:
		return cuk
	}
	return zeta
}

// gatherBanks fills the branches at the output node; those without series resistance are merged into one, put first.
func (s *Stage) gatherBanks(c *Circuit) {
	add := func(b Branch) {
		s.branchCount = gather(s.branches[:], s.branchCount, b)
	}
	for i := range c.Banks {
		b := &c.Banks[i]
		add(Branch{b.Count * b.Capacitance * derating(b.Derating, c.OutputVoltage), b.ESR / b.Count})
	}
	if c.LoadCapacitance > 0 {
		add(Branch{c.LoadCapacitance, c.LoadESR})
	}
}

// gatherFilter fills the input filter: the series winding and the shunt branches.
func (s *Stage) gatherFilter(f *Filter) {
	if !f.present() {
		return
	}
	s.HasFilter = true
	s.FilterInductor = Winding{f.Inductance, f.Resistance}
	s.shuntCount = gather(s.shunts[:], s.shuntCount, Branch{f.Capacitance, f.ESR})
	if f.DampingCapacitance > 0 {
		s.shuntCount = gather(s.shunts[:], s.shuntCount, Branch{f.DampingCapacitance, f.DampingResistance})
	}
}

// present reports whether the filter acts: a capacitor straight across the source changes nothing.
func (f *Filter) present() bool {
	return f.Capacitance > 0 && (f.Inductance > 0 || f.Resistance > 0)
}

// gather adds a branch to a node's list. A branch without resistance is first in the list and takes in every other such branch.
func gather(list []Branch, count int, b Branch) int {
	if b.R != 0 || count == 0 {
		list[count] = b
		return count + 1
	}
	if list[0].R == 0 {
		list[0].C += b.C
		return count
	}
	list[count] = list[0]
	list[0] = b
	return count + 1
}

// derating interpolates a bias table linearly and holds it flat outside; an empty table means 1.
func derating(table []DeratingPoint, voltage float64) float64 {
	if len(table) == 0 {
		return 1
	}
	if voltage <= table[0].Voltage {
		return table[0].Factor
	}
	for k := 1; k < len(table); k++ {
		p, q := table[k-1], table[k]
		if voltage <= q.Voltage {
			if q.Voltage == p.Voltage {
				return q.Factor
			}
			return p.Factor + (q.Factor-p.Factor)*(voltage-p.Voltage)/(q.Voltage-p.Voltage)
		}
	}
	return table[len(table)-1].Factor
}

// Branches returns the capacitor branches at the output node: the banks and the load's capacitance, those without series
// resistance merged into the first.
func (s *Stage) Branches() []Branch { return s.branches[:s.branchCount] }

// capacitance is the sum over the output branches, F.
func (s *Stage) capacitance() float64 {
	sum := 0.0
	for _, b := range s.Branches() {
		sum += b.C
	}
	return sum
}

// parallelResistance is the resistance of all branches of a node in parallel; 0 when one has none.
func parallelResistance(branches []Branch) float64 {
	sum := 0.0
	for _, b := range branches {
		sum += 1 / b.R
	}
	return 1 / sum
}

// esrZero returns the lowest 1/(2π R C) of the branches, NaN when none has resistance.
func (s *Stage) esrZero() float64 {
	lowest := math.NaN()
	for _, b := range s.Branches() {
		if f := 1 / (2 * math.Pi * b.R * b.C); b.R > 0 && !(f >= lowest) {
			lowest = f
		}
	}
	return lowest
}

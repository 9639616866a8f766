package plant

import (
	"math"
	"testing"

	"github.com/stretchr/testify/assert"
)

// rippleBoost is a loss-free boost with an inductor so large that its ripple vanishes.
func rippleBoost() (*Circuit, *Solution) {
	c := &Circuit{Topology: Boost, Phases: 1, InputVoltage: 10, OutputVoltage: 20, LoadCurrent: 2, Behaviour: Resistive,
		Banks: []Bank{{Capacitance: 1, ESR: 1e-6, Count: 1}}}
	s := &Solution{Mode: Continuous, Duty: 0.5, FilterFrequency: 100e3, InductorCurrent: 4}
	return c, s
}

func TestBoostCapacitorCarriesLoadTimesRootOfDutyOverOffDuty(t *testing.T) {
	// Source: closed form I·√(D/D′) of a rectangular current, common practice; theory sheet section 16 names it as the check.
	// 64 harmonics of a rectangle leave out Σ 1/k² beyond: below 0.7 % of the square, 0.35 % of the root.
	for _, duty := range []float64{0.2, 0.5, 0.7} {
		c, s := rippleBoost()
		s.Duty, s.InductorCurrent = duty, c.LoadCurrent/(1-duty)
		assert.InEpsilon(t, c.LoadCurrent*math.Sqrt(duty/(1-duty)), PieceCurrents(c, s)[0], 5e-3, "duty %v", duty)
	}
}

func TestBuckCapacitorCarriesRippleOverRootTwelve(t *testing.T) {
	// Source: rms of a triangle, ΔI/√12; theory sheet section 16. Asymmetric triangles have the same rms.
	for _, duty := range []float64{0.1, 0.5, 0.8} {
		c := &Circuit{Topology: Buck, Phases: 1, InputVoltage: 12, OutputVoltage: 5, LoadCurrent: 3, Behaviour: ConstantCurrent,
			Banks: []Bank{{Capacitance: 1, ESR: 1e-6, Count: 1}}}
		s := &Solution{Mode: Continuous, Duty: duty, FilterFrequency: 200e3, InductorCurrent: 3, InductorRipple: 1.2}
		assert.InEpsilon(t, 1.2/math.Sqrt(12), PieceCurrents(c, s)[0], 1e-4, "duty %v", duty)
	}
}

func TestResistiveCapacitorShowsItsRippleAsVoltage(t *testing.T) {
	// A capacitor that is all resistance drops ESR·ΔI; one that is all capacitance ΔI/(8·f·C) at any duty of a buck.
	// Source: closed forms of a triangle through R and through C, common practice.
	c := &Circuit{Topology: Buck, Phases: 1, InputVoltage: 12, OutputVoltage: 5, LoadCurrent: 3, Behaviour: ConstantCurrent,
		Banks: []Bank{{Capacitance: 1, ESR: 0.02, Count: 2}}}
	s := &Solution{Mode: Continuous, Duty: 0.4, FilterFrequency: 200e3, InductorCurrent: 3, InductorRipple: 1.2}
	assert.InEpsilon(t, 0.01*1.2, OutputRipple(c, s), 0.015, "the triangle's tips are rounded by 64 harmonics")
	c.Banks = []Bank{{Capacitance: 5e-6, Count: 2}}
	assert.InEpsilon(t, 1.2/(8*200e3*10e-6), OutputRipple(c, s), 1e-3)
}

func TestPiecesShareTheRippleCurrent(t *testing.T) {
	c, s := rippleBoost()
	one := PieceCurrents(c, s)[0]
	c.Banks[0].Count = 4
	assert.InEpsilon(t, one/4, PieceCurrents(c, s)[0], 1e-3)
}

func TestInterleavingAtHalfDutyCancelsTheRippleOfTwoPhases(t *testing.T) {
	// Two boost phases at D = 1/2 hand over to each other without a gap. Source: geometry.
	c, s := rippleBoost()
	c.Phases, s.InductorCurrent = 2, 2
	assert.Less(t, PieceCurrents(c, s)[0], 1e-9)
	assert.Less(t, OutputRipple(c, s), 1e-9)
}

func TestDiscontinuousBoostCapacitorMatchesItsTriangle(t *testing.T) {
	// rms² of the capacitor = rms² of the rectifier's triangle − I². Source: closed form, common practice.
	c := &Circuit{Topology: Boost, Phases: 1, InputVoltage: 10, OutputVoltage: 20, LoadCurrent: 0.3, Behaviour: ConstantCurrent,
		Banks: []Bank{{Capacitance: 1, ESR: 1e-6, Count: 1}}}
	peak, duty := 3.0, 0.2 // falls as fast as it rises: D2 = 0.2, average 3·0.4/2 = 0.6, into the output 0.3
	s := &Solution{Mode: Discontinuous, Duty: duty, FilterFrequency: 100e3, InductorCurrent: peak * 0.4 / 2, InductorRipple: peak}
	want := math.Sqrt(peak*peak*0.2/3 - 0.3*0.3)
	// The harmonics above the 64th of its step of 3 A hold peak²/(2π²·64) = 0.007 A², 0.7 % of the root.
	assert.InEpsilon(t, want, PieceCurrents(c, s)[0], 8e-3)
}

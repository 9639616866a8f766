package plant

import (
	"errors"
	"fmt"
	"math"
)

// errSingular says that a model has no finite steady response, so gains and zeros do not exist.
var errSingular = errors.New("the averaged model is singular")

// Solve finds operating point, conduction mode and small-signal model of one circuit. The operating point is the lowest duty with
// the output voltage asked for; the mode is decided with the lossy solution of continuous conduction, as theory sheet sections 3 and 4
// define. Solve reuses the slices of out. For a single inductor, one bank and no input filter in voltage mode and
// continuous conduction it allocates nothing in steady state. Errors: ErrUnreachable (errors.Is), or a number outside
// the model's domain; out then holds no model.
func Solve(c *Circuit, out *Solution) error { return solve(c, out, true) }

// SolveLoop is Solve without what only a point that is shown needs: Resonance and Quality where they take a model of their own (behind an
// input filter, under a current loop, with several banks), and Input.
func SolveLoop(c *Circuit, out *Solution) error { return solve(c, out, false) }

// ModeOf decides the conduction mode alone, as Solve does; 0 where no duty reaches the output voltage or a number is outside the models'
// domain.
func ModeOf(c *Circuit) Mode {
	if check(c) != nil {
		return 0
	}
	s := Reflect(c)
	curve := s.conversion()
	d := curve.duty(s.Output, s.Load)
	if math.IsNaN(d) {
		return 0
	}
	if x := s.steady(d); !c.Synchronous && s.discontinuous(&x) {
		return Discontinuous
	}
	return Continuous
}

func solve(c *Circuit, out *Solution, shown bool) error {
	out.reset()
	if err := check(c); err != nil {
		return fmt.Errorf("solving the power stage: %w", err)
	}
	s := Reflect(c)
	out.TurnsRatio, out.FilterFrequency = s.Turns, s.FilterFrequency
	out.EffectiveInductance, out.StageInductance = s.Inductance*s.Phases, s.Inductance
	out.StageCapacitance = s.capacitance()
	if s.branchCount == 1 {
		out.StageESR = s.branches[0].R
	}
	out.ESRZero = s.esrZero()
	curve := s.conversion()
	d := curve.duty(s.Output, s.Load)
	if math.IsNaN(d) {
		return ErrUnreachable
	}
	x := s.steady(d)
	var err error
	if !c.Synchronous && s.discontinuous(&x) {
		err = s.solveDiscontinuous(c, &x, out, shown)
	} else {
		err = s.solveContinuous(c, &x, out, shown)
	}
	if err != nil {
		out.HasModel = false
		return fmt.Errorf("solving the power stage: %w", err)
	}
	return nil
}

// reset sets every figure to "does not exist" and keeps the storage of the slices.
func (o *Solution) reset() {
	nan := math.NaN()
	control := o.Control
	control.Reset()
	*o = Solution{
		Duty: nan, TurnsRatio: nan, FilterFrequency: nan, InductorCurrent: nan, InductorRipple: nan, SecondCurrent: nan, SecondRipple: nan,
		InductorPeak: nan, SecondPeak: nan, EffectiveInductance: nan, StageInductance: nan, StageCapacitance: nan, StageESR: nan,
		Control: control, ModulatorGain: nan, ControlGain: nan, LineGain: nan, Resonance: nan, Quality: nan, ESRZero: nan, RHPZero: nan,
		OutputResistance: nan,
	}
}

// solveContinuous fills out in continuous conduction.
func (s *Stage) solveContinuous(c *Circuit, x *steady, out *Solution, shown bool) error {
	out.Mode, out.Duty = Continuous, x.duty
	span := x.duty * s.Period / s.Phases
	out.InductorCurrent, out.InductorRipple = x.current/s.Phases, x.slope*span
	out.InductorPeak = out.InductorCurrent + out.InductorRipple/2
	if s.Second.Inductance > 0 {
		out.SecondCurrent, out.SecondRipple = x.second/s.Phases, x.slope2*span
		out.SecondPeak = out.SecondCurrent + out.SecondRipple/2
	}
	out.HasModel = true
	out.ModulatorGain = modulatorGain(&c.Modulator, c.InputVoltage)
	if s.isSecondOrder() && c.Modulator.Scheme == VoltageMode {
		s.secondOrder(x, out)
	} else if err := s.generalModel(c, x, out, shown); err != nil {
		return err
	}
	return finishControl(out)
}

// modulatorGain is what the compensator's output is multiplied with before the plant: duty per volt in voltage mode (with
// feed-forward the ramp follows the input voltage), the control ratio in peak current mode, whose plant takes control volts.
func modulatorGain(m *Modulator, input float64) float64 {
	if m.Scheme == PeakCurrentMode {
		return m.ControlRatio
	}
	ramp := m.RampAmplitude
	if m.FeedForward {
		ramp *= input / m.NominalInput
	}
	return m.ControlRatio / ramp
}

// finishControl derives what follows from the control function and refuses a model that is not finite.
func finishControl(out *Solution) error {
	out.ControlGain = math.Abs(out.Control.Gain)
	for _, v := range [...]float64{out.ControlGain, out.ModulatorGain} {
		if !(v > 0 && v <= math.MaxFloat64) {
			return errSingular
		}
	}
	if sum := out.InductorCurrent + math.Abs(out.InductorRipple) + out.StageCapacitance; math.IsInf(sum, 0) || math.IsNaN(sum) {
		return errSingular
	}
	for _, v := range [...]*float64{&out.LineGain, &out.Resonance, &out.Quality, &out.ESRZero, &out.OutputResistance} {
		if math.IsInf(*v, 0) {
			*v = math.NaN()
		}
	}
	for _, p := range out.Control.Poles {
		if m := math.Hypot(real(p), imag(p)); !(m > 0 && m <= math.MaxFloat64) {
			return errSingular
		}
	}
	out.RHPZero = math.NaN()
	for _, z := range out.Control.Zeros {
		m := math.Hypot(real(z), imag(z))
		if !(m > 0 && m <= math.MaxFloat64) {
			return errSingular
		}
		if f := m / (2 * math.Pi); real(z) > 0 && !(f >= out.RHPZero) {
			out.RHPZero = f
		}
	}
	return nil
}

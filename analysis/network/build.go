package network

import (
	"fmt"
	"math"

	"halfplane/analysis/transfer"
)

// Build writes the transfer function of p into out, with the finite amplifier where p has its data. The storage of out is
// reused; nothing of p is kept. The error names the part whose value makes no network.
func Build(p *Parts, out *transfer.Product) error { return build(p, out, true) }

// BuildIdeal is Build with the amplifier taken as ideal (unlimited gain and bandwidth).
func BuildIdeal(p *Parts, out *transfer.Product) error { return build(p, out, false) }

func build(p *Parts, out *transfer.Product, finite bool) error {
	out.Reset()
	if p.Kind != Digital {
		out.Sampled = nil
	}
	if err := p.check(); err != nil {
		return err
	}
	switch p.Kind {
	case Type1, Type2, Type3:
		if finite && p.hasAmplifier() {
			return finiteAmplifier(p, &out.Function)
		}
		idealAmplifier(p, &out.Function)
	case Transconductance:
		transconductor(p, &out.Function)
	case Optocoupler:
		optocoupler(p, &out.Function)
	case TransferFunction:
		direct(p, &out.Function)
	case Digital:
		return digital(p, out)
	}
	return nil
}

// need is one part that a network cannot do without, by its name in the spec format.
type need struct {
	name  string
	value float64
}

// check says whether the values describe a network of p's kind: those that it needs are positive, no other is negative, all finite.
func (p *Parts) check() error {
	var needs [7]need
	list := needs[:0]
	switch p.Kind {
	case Type1:
		list = append(list, need{"upper-resistor", p.UpperResistor}, need{"integrator-capacitor", p.IntegratorCapacitor})
	case Type2:
		list = append(list, need{"upper-resistor", p.UpperResistor}, need{"feedback-resistor", p.FeedbackResistor},
			need{"integrator-capacitor", p.IntegratorCapacitor})
	case Type3:
		list = append(list, need{"upper-resistor", p.UpperResistor}, need{"feedback-resistor", p.FeedbackResistor},
			need{"integrator-capacitor", p.IntegratorCapacitor}, need{"lead-capacitor", p.LeadCapacitor})
	case Transconductance:
		list = append(list, need{"transconductance", p.Transconductance}, need{"upper-resistor", p.UpperResistor},
			need{"lower-resistor", p.LowerResistor}, need{"feedback-resistor", p.FeedbackResistor},
			need{"integrator-capacitor", p.IntegratorCapacitor})
	case Optocoupler:
		list = append(list, need{"upper-resistor", p.UpperResistor}, need{"integrator-capacitor", p.IntegratorCapacitor},
			need{"led-resistor", p.LEDResistor}, need{"pull-up-resistor", p.PullUpResistor},
			need{"current-transfer-ratio", p.CurrentTransferRatio})
	case TransferFunction, Digital:
	default:
		return fmt.Errorf("building a network: kind %d does not exist", int(p.Kind))
	}
	for _, n := range list {
		if !(n.value > 0) || math.IsInf(n.value, 0) {
			return fmt.Errorf("building a %s network: %s is %v", p.Kind, n.name, n.value)
		}
	}
	return p.checkOptional()
}

func (p *Parts) checkOptional() error {
	list := [...]need{
		{"lower-resistor", p.LowerResistor}, {"feedback-resistor", p.FeedbackResistor}, {"rolloff-capacitor", p.RolloffCapacitor},
		{"lead-resistor", p.LeadResistor}, {"lead-capacitor", p.LeadCapacitor}, {"amplifier.gain-bandwidth", p.GainBandwidth},
		{"amplifier.open-loop-gain", p.OpenLoopGain}, {"output-resistance", p.OutputResistance}, {"optocoupler-pole", p.OptocouplerPole},
		{"integrator", p.Integrator}, {"delay", p.Delay},
	}
	for _, n := range list {
		if !(n.value >= 0) || math.IsInf(n.value, 0) {
			return fmt.Errorf("building a %s network: %s is %v", p.Kind, n.name, n.value)
		}
	}
	return nil
}

// SetPoint is the output voltage (V) that the divider asks for, Vref·(1 + R1/RL), or NaN where the network has no divider or
// no reference.
func SetPoint(p *Parts) float64 {
	if p.Kind == TransferFunction || p.Kind == Digital || !(p.ReferenceVoltage > 0 && p.UpperResistor > 0 && p.LowerResistor > 0) {
		return math.NaN()
	}
	return p.ReferenceVoltage * (1 + p.UpperResistor/p.LowerResistor)
}

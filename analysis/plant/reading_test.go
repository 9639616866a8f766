package plant

import (
	"encoding/json"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"
)

// The golden designs are read here with a reader for just the notations that they use, so that this package's tests lean on no other.

type tree = map[string]any

// golden is one file of testdata/reference.
type golden struct {
	Name            string
	Spec            tree
	Corners         []goldenCorner
	CriticalCurrent float64 `json:"critical-current"`
	Ripple          tree    `json:"ripple-corrected-nominal"`
}

type goldenCorner struct {
	Name string
	At   map[string]float64
	Mode string
	// All other figures, by key.
	Figures tree
}

func (c *goldenCorner) UnmarshalJSON(text []byte) error {
	type plain struct {
		Name, Mode string
		At         map[string]float64
	}
	var p plain
	if err := json.Unmarshal(text, &p); err != nil {
		return err
	}
	c.Name, c.Mode, c.At = p.Name, p.Mode, p.At
	return json.Unmarshal(text, &c.Figures)
}

// figure returns a number below dotted keys; ok is false when it is null or absent.
func figure(n tree, path string) (float64, bool) {
	keys := strings.Split(path, ".")
	for _, k := range keys[:len(keys)-1] {
		next, ok := n[k].(tree)
		if !ok {
			return 0, false
		}
		n = next
	}
	v, ok := n[keys[len(keys)-1]].(float64)
	return v, ok
}

func readGolden(t testing.TB) []golden {
	files, err := filepath.Glob("../../testdata/reference/*.expected.json")
	require.NoError(t, err)
	require.Len(t, files, 20)
	all := make([]golden, len(files))
	for i, f := range files {
		text, err := os.ReadFile(f)
		require.NoError(t, err)
		require.NoError(t, json.Unmarshal(text, &all[i]), f)
	}
	return all
}

var quantity = regexp.MustCompile(`^(-?[0-9.]+(?:e-?[0-9]+)?)\s*(m|k|u|n|p|M)?(Hz|H|F|Ω|R|A|V/us|V|s|)$`)
var letterCode = regexp.MustCompile(`^([0-9]+)([RkmunpM])([0-9]+)$`)
var prefixes = map[string]float64{"": 1, "m": 1e-3, "k": 1e3, "u": 1e-6, "n": 1e-9, "p": 1e-12, "M": 1e6, "R": 1}

// nominal reads one quantity of the golden files and leaves its spread out.
func nominal(t testing.TB, v any) float64 {
	switch v := v.(type) {
	case nil:
		return 0
	case float64:
		return v
	case tree:
		if value, ok := v["value"]; ok {
			return nominal(t, value)
		}
		if value, ok := v["nominal"]; ok {
			return nominal(t, value)
		}
		return (nominal(t, v["min"]) + nominal(t, v["max"])) / 2
	}
	text, _, _ := strings.Cut(v.(string), "±")
	text = strings.TrimSpace(text)
	if m := letterCode.FindStringSubmatch(text); m != nil {
		number, err := strconv.ParseFloat(m[1]+"."+m[3], 64)
		require.NoError(t, err, text)
		return number * prefixes[m[2]]
	}
	m := quantity.FindStringSubmatch(text)
	require.NotNil(t, m, text)
	number, err := strconv.ParseFloat(m[1], 64)
	require.NoError(t, err, text)
	number *= prefixes[m[2]]
	if m[3] == "V/us" {
		number *= 1e6
	}
	return number
}

func child(n tree, key string) tree { c, _ := n[key].(tree); return c }

func text(n tree, key string) string { s, _ := n[key].(string); return s }

func yes(n tree, key string) bool { b, _ := n[key].(bool); return b }

func or(v, fallback float64) float64 {
	if v == 0 {
		return fallback
	}
	return v
}

// circuitOf turns a golden spec into its nominal circuit.
func circuitOf(t testing.TB, spec tree) Circuit {
	q := func(n tree, key string) float64 { return nominal(t, n[key]) }
	topology, ok := ParseTopology(text(spec, "topology"))
	require.True(t, ok, "%v", spec["topology"])
	load, turns, inductor := child(spec, "load"), child(spec, "turns"), child(spec, "inductor")
	bank, coupling, filter, m := child(spec, "output-capacitor"), child(spec, "coupling-capacitor"), child(spec, "input-filter"), child(spec, "modulator")
	behaviour, _ := ParseBehaviour(text(load, "behaviour"))
	scheme, _ := ParseScheme(text(m, "scheme"))
	second := child(spec, "second-inductor")
	c := Circuit{
		Topology: topology, Phases: int(or(q(spec, "phases"), 1)), SwitchingFrequency: q(spec, "switching-frequency"),
		InputVoltage: q(spec, "input-voltage"), OutputVoltage: q(spec, "output-voltage"), LoadCurrent: q(load, "current"),
		Behaviour: Behaviour(max(int(behaviour), 1)), TurnsPrimary: or(q(turns, "primary"), 1), TurnsSecondary: or(q(turns, "secondary"), 1),
		InductorOnPrimary:     text(inductor, "side") == "primary",
		Inductor:              Winding{q(inductor, "inductance"), q(inductor, "resistance")},
		SecondInductor:        Winding{q(second, "inductance"), q(second, "resistance")},
		Coupling:              Bank{Capacitance: q(coupling, "capacitance"), ESR: q(coupling, "esr"), Count: 1},
		Banks:                 []Bank{{Capacitance: q(bank, "capacitance"), ESR: q(bank, "esr"), Count: or(q(bank, "count"), 1)}},
		MagnetizingInductance: q(spec, "magnetizing-inductance"),
		SwitchResistance:      q(child(spec, "switch"), "on-resistance"),
		RectifierDrop:         q(child(spec, "rectifier"), "forward-drop"), RectifierResistance: q(child(spec, "rectifier"), "resistance"),
		Synchronous: yes(child(spec, "rectifier"), "synchronous"),
		Filter: Filter{q(filter, "inductance"), q(filter, "resistance"), q(filter, "capacitance"), q(filter, "esr"),
			q(filter, "damping-resistance"), q(filter, "damping-capacitance")},
		Modulator: Modulator{Scheme: scheme, RampAmplitude: q(m, "ramp-amplitude"), FeedForward: yes(m, "feed-forward"),
			NominalInput: q(spec, "input-voltage"), CurrentSenseGain: q(m, "current-sense-gain"), SlopeCompensation: q(m, "slope-compensation"),
			ControlRatio: or(q(m, "control-ratio"), 1), Delay: q(m, "delay")},
	}
	c.OutputVoltage = max(c.OutputVoltage, -c.OutputVoltage)
	return c
}

// assign sets the fields of a corner.
func assign(t testing.TB, c *Circuit, at map[string]float64) {
	for path, v := range at {
		switch path {
		case "input-voltage":
			c.InputVoltage = v
		case "load.current":
			c.LoadCurrent = v
		case "inductor.inductance":
			c.Inductor.Inductance = v
		case "second-inductor.inductance":
			c.SecondInductor.Inductance = v
		case "coupling-capacitor.capacitance":
			c.Coupling.Capacitance = v
		case "output-capacitor.capacitance":
			c.Banks[0].Capacitance = v
		case "output-capacitor.esr":
			c.Banks[0].ESR = v
		default:
			require.True(t, strings.HasPrefix(path, "compensator."), path)
		}
	}
}

// roots reads a list of [re, im], sorted by magnitude, then imaginary part.
func roots(v any) []complex128 {
	list, _ := v.([]any)
	out := make([]complex128, len(list))
	for i, r := range list {
		p := r.([]any)
		out[i] = complex(p[0].(float64), p[1].(float64))
	}
	return sorted(out)
}

func sorted(in []complex128) []complex128 {
	out := slices.Clone(in)
	slices.SortFunc(out, func(a, b complex128) int {
		x, y := real(a)*real(a)+imag(a)*imag(a), real(b)*real(b)+imag(b)*imag(b)
		switch {
		case x < y*(1-1e-9):
			return -1
		case y < x*(1-1e-9):
			return 1
		case imag(a) < imag(b):
			return -1
		case imag(a) > imag(b):
			return 1
		}
		return 0
	})
	return out
}

// Package refdata reads the golden designs of testdata/reference for the tests of the packages around it: the spec that
// stands inside each NAME.expected.json becomes an analysis.Design, the figures beside it stay as they are.
//
// It is used by tests alone and understands no more of the spec format than those files use; package schema is the reader
// of what people write. Start at Load.
package refdata

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"sort"
	"strings"

	"halfplane/analysis"
)

// Case is one golden design.
type Case struct {
	Name    string
	Design  *analysis.Design
	Corners []Corner
	Worst   map[string]Worst
	Ripple  *Loop // at nominal, with the comparator's ripple counted; nil where it does not apply
}

// Corner is one golden assignment and its figures, with the keys of the files.
type Corner struct {
	Name  string             `json:"name"`
	At    map[string]float64 `json:"at"`
	Mode  string             `json:"mode"`
	Duty  float64            `json:"duty"`
	Plant json.RawMessage    `json:"plant"`
	Loop  *Loop              `json:"loop"`
	Raw   json.RawMessage    `json:"-"` // the whole object
}

// Loop is a golden loop measurement; nil stands for null.
type Loop struct {
	Crossover           *float64     `json:"crossover"`
	Crossovers          []float64    `json:"crossovers"`
	PhaseMargin         *float64     `json:"phase-margin"`
	GainMargin          *float64     `json:"gain-margin"`
	GainReductionMargin *float64     `json:"gain-reduction-margin"`
	PhaseCrossovers     [][2]float64 `json:"phase-crossovers"`
	ModulusMargin       *float64     `json:"modulus-margin"`
	Stable              bool         `json:"stable"`
}

// Worst is one golden worst value and the assignment at which the search of the reference found it.
type Worst struct {
	Value float64            `json:"value"`
	At    map[string]float64 `json:"at"`
}

// UnmarshalJSON keeps the whole object beside the named keys.
func (c *Corner) UnmarshalJSON(text []byte) error {
	type plain Corner
	if err := json.Unmarshal(text, (*plain)(c)); err != nil {
		return err
	}
	c.Raw = append(json.RawMessage(nil), text...)
	return nil
}

// Settings gives the corner's assignment in a fixed order.
func (c *Corner) Settings() []analysis.Setting { return settings(c.At) }

// Settings gives the assignment of a worst value in a fixed order.
func (w *Worst) Settings() []analysis.Setting { return settings(w.At) }

func settings(at map[string]float64) []analysis.Setting {
	out := make([]analysis.Setting, 0, len(at))
	for path, value := range at {
		out = append(out, analysis.Setting{Path: path, Value: value})
	}
	sort.Slice(out, func(i, k int) bool { return out[i].Path < out[k].Path })
	return out
}

// Load reads every golden design, sorted by name.
func Load() ([]Case, error) {
	_, self, _, _ := runtime.Caller(0)
	folder := filepath.Join(filepath.Dir(self), "..", "..", "..", "testdata", "reference")
	files, err := filepath.Glob(filepath.Join(folder, "*.expected.json"))
	if err != nil {
		return nil, err
	}
	if len(files) == 0 {
		return nil, fmt.Errorf("no golden designs in %s", folder)
	}
	var cases []Case
	for _, file := range files {
		c, err := read(file)
		if err != nil {
			return nil, fmt.Errorf("reading %s: %w", filepath.Base(file), err)
		}
		cases = append(cases, c)
	}
	return cases, nil
}

func read(file string) (Case, error) {
	text, err := os.ReadFile(file)
	if err != nil {
		return Case{}, err
	}
	var raw struct {
		Spec    map[string]any             `json:"spec"`
		Corners []Corner                   `json:"corners"`
		Worst   map[string]json.RawMessage `json:"worst"`
		Ripple  *Loop                      `json:"ripple-corrected-nominal"`
	}
	if err := json.Unmarshal(text, &raw); err != nil {
		return Case{}, err
	}
	worst := map[string]Worst{}
	for key, text := range raw.Worst {
		var w Worst
		if err := json.Unmarshal(text, &w); err == nil && w.At != nil {
			worst[key] = w
		}
	}
	design, err := designOf(raw.Spec)
	if err != nil {
		return Case{}, err
	}
	name := strings.TrimSuffix(filepath.Base(file), ".expected.json")
	return Case{Name: name, Design: design, Corners: raw.Corners, Worst: worst, Ripple: raw.Ripple}, nil
}

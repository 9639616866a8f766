package main

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// refCorner holds the figures that are compared, of the reference and of the program alike.
type refCorner struct {
	At     map[string]float64
	Mode   *string
	Duty   *float64
	Amps   *float64 `json:"inductor-current"`
	Ripple *float64 `json:"inductor-ripple"`
	Plant  *struct {
		ControlGain *float64     `json:"control-gain"`
		LineGain    *float64     `json:"line-gain"`
		Resonance   *float64     `json:"resonance"`
		Quality     *float64     `json:"quality"`
		ESRZero     *float64     `json:"esr-zero"`
		RHPZero     *float64     `json:"rhp-zero"`
		Poles       [][2]float64 `json:"poles"`
		Zeros       [][2]float64 `json:"zeros"`
	}
	Loop *struct {
		Crossover     *float64   `json:"crossover"`
		Crossovers    []*float64 `json:"crossovers"`
		PhaseMargin   *float64   `json:"phase-margin"`
		GainMargin    *float64   `json:"gain-margin"`
		ModulusMargin *float64   `json:"modulus-margin"`
		Stable        bool       `json:"stable"`
	}
	EffectiveInductance *float64 `json:"effective-inductance"`
}

// TestFiguresAgreeWithTheReference asks the program for every corner of every reference design with --at. Source:
// independent computation, testdata/reference (README there). Tolerances: duty and currents 0.2 %, frequencies 0.5 %,
// phase margin 0.3°, gain margin 0.1 dB, modulus margin 1 %; in discontinuous conduction 1 % and 1°.
func TestFiguresAgreeWithTheReference(t *testing.T) {
	files, err := filepath.Glob("../../testdata/reference/*.expected.json")
	require.NoError(t, err)
	require.GreaterOrEqual(t, len(files), 6)
	for _, file := range files {
		text, err := os.ReadFile(file)
		require.NoError(t, err)
		var want struct{ Corners []refCorner }
		require.NoError(t, json.Unmarshal(text, &want))
		design := strings.TrimSuffix(file, ".expected.json") + ".converter.yaml"
		t.Run(filepath.Base(design), func(t *testing.T) {
			require.NotEmpty(t, want.Corners)
			for _, corner := range want.Corners {
				compare(t, corner, figuresAt(t, design, corner.At))
			}
		})
	}
}

// figuresAt runs the command as a person would.
func figuresAt(t *testing.T, design string, at map[string]float64) refCorner {
	var settings []string
	for path, value := range at {
		settings = append(settings, path+"="+strconv.FormatFloat(value, 'g', -1, 64))
	}
	slices.Sort(settings)
	var out, errs bytes.Buffer
	code := run([]string{"figures", design, "--as", "json", "--at", strings.Join(settings, ",")}, nil, &out, &errs)
	require.Equal(t, 0, code, errs.String())
	var got struct {
		Corners []refCorner
		Worst   any
	}
	require.NoError(t, json.Unmarshal(out.Bytes(), &got))
	require.Len(t, got.Corners, 1)
	assert.Nil(t, got.Worst)
	for path, value := range at {
		assert.InDelta(t, math.Abs(value), got.Corners[0].At[path], 1e-12*math.Abs(value), path)
	}
	return got.Corners[0]
}

func compare(t *testing.T, want, got refCorner) {
	percent, degrees := 1.0, 0.3
	if want.Mode != nil && *want.Mode == "dcm" {
		percent, degrees = 2, 1
	}
	ratio := func(name string, want, got *float64, tolerance float64) {
		t.Helper()
		if want == nil || got == nil {
			assert.Equal(t, want == nil, got == nil, "%s exists, %v", name, want)
			return
		}
		assert.InDelta(t, *want, *got, percent*tolerance*math.Abs(*want)+1e-12, name)
	}
	assert.Equal(t, want.Mode, got.Mode)
	ratio("duty", want.Duty, got.Duty, 0.002)
	ratio("inductor current", want.Amps, got.Amps, 0.002)
	ratio("inductor ripple", want.Ripple, got.Ripple, 0.002)
	require.Equal(t, want.Plant == nil, got.Plant == nil, "a model exists")
	if want.Plant != nil {
		w, g := want.Plant, got.Plant
		ratio("control gain", w.ControlGain, g.ControlGain, 0.005)
		ratio("line gain", w.LineGain, g.LineGain, 0.005)
		ratio("resonance", w.Resonance, g.Resonance, 0.005)
		ratio("quality", w.Quality, g.Quality, 0.005)
		ratio("ESR zero", w.ESRZero, g.ESRZero, 0.005)
		ratio("RHP zero", w.RHPZero, g.RHPZero, 0.005)
		roots(t, "poles", w.Poles, g.Poles, 0.005*percent)
		roots(t, "zeros", w.Zeros, g.Zeros, 0.005*percent)
	}
	require.Equal(t, want.Loop == nil, got.Loop == nil, "the loop has figures")
	if want.Loop == nil {
		return
	}
	w, g := want.Loop, got.Loop
	ratio("crossover", w.Crossover, g.Crossover, 0.005)
	assert.Len(t, g.Crossovers, len(w.Crossovers))
	assert.Equal(t, w.Stable, g.Stable)
	within := func(name string, want, got *float64, tolerance float64) {
		t.Helper()
		if want == nil || got == nil {
			assert.Equal(t, want == nil, got == nil, "%s exists", name)
			return
		}
		assert.InDelta(t, *want, *got, tolerance, name)
	}
	within("phase margin", w.PhaseMargin, g.PhaseMargin, degrees)
	within("gain margin", w.GainMargin, g.GainMargin, 0.1)
	ratio("modulus margin", w.ModulusMargin, g.ModulusMargin, 0.01)
}

// roots compares two sets of poles or zeros, each of the reference's with the nearest of the program's.
func roots(t *testing.T, name string, want, got [][2]float64, tolerance float64) {
	t.Helper()
	if !assert.Len(t, got, len(want), name) {
		return
	}
	for _, w := range want {
		nearest := math.Inf(1)
		for _, g := range got {
			nearest = min(nearest, math.Hypot(w[0]-g[0], w[1]-g[1]))
		}
		assert.LessOrEqual(t, nearest, tolerance*math.Hypot(w[0], w[1]), "%s: %v", name, w)
	}
}

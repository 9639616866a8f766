package report

import (
	"bytes"
	"context"
	"encoding/json"
	"path/filepath"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/workspace"
)

// designs are all files of testdata/reference: every topology, scheme and network.
func designs(t testing.TB) []string {
	names, err := filepath.Glob("../testdata/reference/*.converter.yaml")
	require.NoError(t, err)
	require.NotEmpty(t, names)
	return names
}

func analysed(t testing.TB, name string) workspace.File {
	f := workspace.Open(filepath.Dir(name)).CheckFile(context.Background(), name, workspace.Options{Depth: analysis.Quick})
	require.NotNil(t, f.Result, "%s: %v", name, f.Findings)
	return f
}

func TestFiguresFitTheirSchema(t *testing.T) {
	for _, name := range designs(t) {
		t.Run(filepath.Base(name), func(t *testing.T) {
			f := analysed(t, name)
			one := f.Result.Corners[0]
			for _, o := range []FigureOptions{{}, {AllCorners: true}, {At: &one}} {
				var b bytes.Buffer
				require.NoError(t, JSONFigures(&b, f, o))
				fits(t, FiguresSchema(), b.Bytes())
				b.Reset()
				require.NoError(t, TextFigures(&b, f, o))
				assert.NotContains(t, b.String(), "NaN")
				assert.NotContains(t, b.String(), "\x1b")
			}
		})
	}
}

func TestWorstFiguresPointAtTheCornerThatHasThem(t *testing.T) {
	for _, name := range designs(t) {
		t.Run(filepath.Base(name), func(t *testing.T) {
			f := analysed(t, name)
			for _, o := range []FigureOptions{{}, {AllCorners: true}} {
				var b bytes.Buffer
				require.NoError(t, JSONFigures(&b, f, o))
				var got struct {
					Corners []struct {
						At    map[string]float64
						Plant *struct {
							RHPZero *float64 `json:"rhp-zero"`
						}
						Loop map[string]any
					}
					Worst map[string]*struct {
						Value  float64
						Corner int
					}
				}
				require.NoError(t, json.Unmarshal(b.Bytes(), &got))
				for key, from := range map[string]string{
					"phase-margin": "phase-margin", "gain-margin": "gain-margin", "modulus-margin": "modulus-margin",
					"crossover": "crossover", "crossover-low": "crossover",
				} {
					w := got.Worst[key]
					if w == nil {
						continue
					}
					require.Less(t, w.Corner, len(got.Corners))
					assert.Equal(t, w.Value, got.Corners[w.Corner].Loop[from], key)
				}
				if w := got.Worst["rhp-zero"]; w != nil {
					assert.Equal(t, w.Value, *got.Corners[w.Corner].Plant.RHPZero)
				}
				if !o.AllCorners {
					assert.LessOrEqual(t, len(got.Corners), 1+f.Result.Operating+8)
				}
			}
		})
	}
}

func TestNominalComesFirstThenTheOperatingCorners(t *testing.T) {
	f := analysed(t, "../testdata/reference/beacon-boost-type3.converter.yaml")
	out := figuresOf(f, FigureOptions{})
	at := func(i int) [2]float64 {
		var p [2]float64
		for _, s := range out.Corners[i].At {
			switch s.Path {
			case "input-voltage":
				p[0] = s.Value
			case "load.current":
				p[1] = s.Value
			}
		}
		return p
	}
	assert.Equal(t, [2]float64{12, 1}, at(0))
	var operating [][2]float64
	for i := 1; i <= f.Result.Operating; i++ {
		operating = append(operating, at(i))
	}
	assert.ElementsMatch(t, [][2]float64{{9, 0.2}, {9, 1.5}, {16, 0.2}, {16, 1.5}, {12, 1.5}}, operating)
}

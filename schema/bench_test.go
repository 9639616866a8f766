package schema

import (
	"bytes"
	"fmt"
	"os"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"
	yaml "go.yaml.in/yaml/v4"
)

// benchText is a design of the tidal research station, repeated under numbered keys up to a number of lines.
func benchText(b *testing.B, lines int) []byte {
	text, err := os.ReadFile("testdata/documents/gauge-boost.converter.yaml")
	require.NoError(b, err)
	var out bytes.Buffer
	for i := 0; bytes.Count(out.Bytes(), []byte("\n")) < lines; i++ {
		fmt.Fprintf(&out, "gauge-%d:\n  %s\n", i, strings.ReplaceAll(strings.TrimSpace(string(text)), "\n", "\n  "))
	}
	return out.Bytes()
}

func BenchmarkRead(b *testing.B) {
	for _, lines := range []int{200, 5000} {
		text := benchText(b, lines)
		b.Run(fmt.Sprintf("%d-lines", lines), func(b *testing.B) {
			b.ReportAllocs()
			b.SetBytes(int64(len(text)))
			for b.Loop() {
				if d := Read("gauge.converter.yaml", text, 0); len(d.Problems) > 0 {
					b.Fatal(said(d))
				}
			}
			b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N), "µs/read")
		})
	}
}

// BenchmarkReadFloor is the same text through a general YAML library to a tree with starts only: the ratio to
// BenchmarkRead is what our own reader gains.
func BenchmarkReadFloor(b *testing.B) {
	text := benchText(b, 200)
	b.ReportAllocs()
	for b.Loop() {
		var n yaml.Node
		require.NoError(b, yaml.Unmarshal(text, &n))
	}
	b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N), "µs/read")
}

// BenchmarkKeystroke is what an editor's change costs before anything is checked: the edit and a full reading.
func BenchmarkKeystroke(b *testing.B) {
	for _, lines := range []int{200, 5000} {
		text := benchText(b, lines)
		b.Run(fmt.Sprintf("%d-lines", lines), func(b *testing.B) {
			d := Read("gauge.converter.yaml", text, 0)
			at := d.Find("/gauge-0/compensator/feedback-resistor").End
			b.ReportAllocs()
			for b.Loop() {
				d = d.Replace(at-1, at, "%", d.Version+1)
			}
			b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N), "µs/edit")
		})
	}
}

func BenchmarkPosition(b *testing.B) {
	d := Read("gauge.converter.yaml", benchText(b, 5000), 0)
	for b.Loop() {
		d.UTF16(len(d.Text) / 2)
	}
}

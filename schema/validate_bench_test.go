package schema

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/require"
)

// longDesign is a design of about 200 lines: the beacon boost with its banks, waivers and comments written out.
func longDesign(t testing.TB) []byte {
	text, err := os.ReadFile("../testdata/reference/beacon-boost-type3.converter.yaml")
	require.NoError(t, err)
	var b bytes.Buffer
	b.Write(text)
	b.WriteString("waivers:\n")
	for i := range 40 {
		fmt.Fprintf(&b, "  - rule: phase-margin\n    reason: measured on bench %d, see the log of the tidal station\n    until: 2027-03-31\n    corner: lowest input\n", i)
	}
	return b.Bytes()
}

func BenchmarkValidateLongDesign(b *testing.B) {
	doc := Read("long.converter.yaml", longDesign(b), 0)
	require.Greater(b, strings.Count(string(doc.Text), "\n"), 180)
	_, problems := Validate(doc, nil)
	require.Empty(b, problems)
	b.ReportAllocs()
	for b.Loop() {
		Validate(doc, nil)
	}
}

func BenchmarkReadAndValidateLongDesign(b *testing.B) {
	text := longDesign(b)
	Validate(Read("long.converter.yaml", text, 0), nil)
	b.ReportAllocs()
	for b.Loop() {
		Validate(Read("long.converter.yaml", text, 0), nil)
	}
}

func BenchmarkParseQuantity(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		if _, err := ParseQuantity("22 uH ± 20 %", Inductance); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkLookupField(b *testing.B) {
	LookupField(Design, "/inductor/inductance")
	b.ReportAllocs()
	for b.Loop() {
		LookupField(Design, "/inductor/inductance")
	}
}

// BenchmarkFirstValidation starts a process of its own for each round, so that the schema is compiled every time; it
// reports what the first validation takes there.
func BenchmarkFirstValidation(b *testing.B) {
	var total time.Duration
	rounds := 0
	for b.Loop() {
		out, err := exec.Command(os.Args[0], "-test.run=^TestFirstValidationInAProcessOfItsOwn$", "-test.v").Output()
		require.NoError(b, err)
		_, after, found := strings.Cut(string(out), "first validation ")
		require.True(b, found)
		text, _, _ := strings.Cut(after, "\n")
		d, err := time.ParseDuration(text)
		require.NoError(b, err)
		total += d
		rounds++
	}
	b.ReportMetric(float64(total.Microseconds())/float64(rounds)/1000, "ms/first")
}

func TestFirstValidationInAProcessOfItsOwn(t *testing.T) {
	doc := readFile(t, "../testdata/reference/beacon-boost-type3.converter.yaml")
	start := time.Now()
	spec, _ := Validate(doc, nil)
	t.Logf("first validation %v", time.Since(start))
	require.NotNil(t, spec)
}

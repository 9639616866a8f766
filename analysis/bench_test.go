package analysis_test

import (
	"context"
	"strings"
	"testing"

	"github.com/stretchr/testify/require"

	"halfplane/analysis"
)

func benchDesign(b *testing.B, name string) *analysis.Design {
	for _, c := range golden(b) {
		if strings.HasPrefix(c.Name, name) {
			return c.Design
		}
	}
	require.Fail(b, "no design", name)
	return nil
}

// The goals (quality page): quick 2 ms on one core, reading included, 10 ms for two-inductor stages; full 250 ms on two cores.
func BenchmarkDesign(b *testing.B) {
	for _, name := range []string{"beacon-boost", "railway-flyback", "winch-sepic", "lighthouse-buck", "robot-buck", "charger-buck"} {
		d := benchDesign(b, name)
		for _, depth := range []analysis.Depth{analysis.Quick, analysis.Full} {
			b.Run(depth.String()+"/"+name, func(b *testing.B) {
				b.ReportAllocs()
				corners := 0
				for b.Loop() {
					r, err := analysis.Analyse(context.Background(), d, analysis.Options{Depth: depth, Jobs: 1})
					require.NoError(b, err)
					corners = len(r.Corners)
				}
				b.ReportMetric(float64(corners), "corners")
				b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N)/float64(corners), "µs/corner")
			})
		}
	}
}

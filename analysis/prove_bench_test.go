package analysis

import (
	"context"
	"fmt"
	"testing"

	"github.com/stretchr/testify/require"
)

// The goal (quality page): a lead design with five toleranced parts within ten seconds on two cores.
func BenchmarkProve(b *testing.B) {
	for _, parts := range []int{5, 8} {
		d := buoyWithSpreads(parts)
		r, err := Analyse(context.Background(), d, Options{})
		require.NoError(b, err)
		for _, share := range []float64{0.8, 0.95} {
			need := Need{PhaseMargin: share * r.Worst.PhaseMargin.Value, GainMargin: share * r.Worst.GainMargin.Value, ModulusMargin: share * r.Worst.ModulusMargin.Value}
			b.Run(fmt.Sprintf("%d parts, limits at %v of the worst", parts, share), func(b *testing.B) {
				boxes := 0
				for b.Loop() {
					p, err := Prove(context.Background(), d, need, ProveOptions{Found: r})
					require.NoError(b, err)
					for _, c := range []*Certificate{p.PhaseMargin, p.GainMargin, p.ModulusMargin} {
						require.Equal(b, Proved, c.Verdict, c.Why)
						boxes += c.Boxes
					}
				}
				b.ReportMetric(float64(boxes)/float64(b.N), "boxes")
				b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(boxes), "µs/box")
			})
		}
	}
}

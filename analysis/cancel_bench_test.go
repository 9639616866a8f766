package analysis_test

import (
	"context"
	"testing"
	"time"

	"github.com/stretchr/testify/require"

	"halfplane/analysis"
)

// BenchmarkCancel is how long an analysis, the building of units and a proof go on after their context has ended. The goal is a millisecond or
// two; what is measured holds the waking of goroutines on a busy machine too.
func BenchmarkCancel(b *testing.B) {
	latency := func(b *testing.B, after time.Duration, work func(ctx context.Context)) {
		var total, most time.Duration
		for b.Loop() {
			ctx, cancel := context.WithCancel(context.Background())
			var ended time.Time
			timer := time.AfterFunc(after, func() { ended = time.Now(); cancel() })
			work(ctx)
			<-ctx.Done()
			timer.Stop()
			d := time.Since(ended)
			total += d
			most = max(most, d)
		}
		b.ReportMetric(float64(total.Microseconds())/float64(b.N)/1000, "mean-ms")
		b.ReportMetric(float64(most.Microseconds())/1000, "most-ms")
	}
	for _, name := range []string{"beacon-boost", "lighthouse-buck", "winch-sepic", "railway-flyback", "robot-buck"} {
		d := benchDesign(b, name)
		b.Run("analysis/"+name, func(b *testing.B) {
			latency(b, 9*time.Millisecond, func(ctx context.Context) {
				_, err := analysis.Analyse(ctx, d, analysis.Options{})
				require.ErrorIs(b, err, context.Canceled)
			})
		})
	}
	d := benchDesign(b, "beacon-boost")
	b.Run("units", func(b *testing.B) {
		latency(b, 9*time.Millisecond, func(ctx context.Context) {
			_, err := analysis.YieldOf(ctx, d, analysis.Need{}, analysis.YieldOptions{Samples: 1 << 20})
			require.ErrorIs(b, err, context.Canceled)
		})
	})
	r, err := analysis.Analyse(context.Background(), d, analysis.Options{})
	require.NoError(b, err)
	need := analysis.Need{PhaseMargin: r.Worst.PhaseMargin.Value * 0.999, GainMargin: r.Worst.GainMargin.Value * 0.999, ModulusMargin: r.Worst.ModulusMargin.Value * 0.999}
	b.Run("proof", func(b *testing.B) {
		latency(b, 9*time.Millisecond, func(ctx context.Context) {
			_, err := analysis.Prove(ctx, d, need, analysis.ProveOptions{Found: r})
			require.ErrorIs(b, err, context.Canceled)
		})
	})
}

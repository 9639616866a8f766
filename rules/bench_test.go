package rules

import (
	"context"
	"os"
	"testing"

	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/schema"
)

// BenchmarkRun measures all rules on one analysed design: what a keystroke pays after the analysis.
func BenchmarkRun(b *testing.B) {
	for _, depth := range []struct {
		name  string
		depth analysis.Depth
	}{{"quick", analysis.Quick}, {"full", analysis.Full}} {
		for _, name := range []string{"internal/healthy-boost", "closed-loop-stability/too-much-gain", "not-assessed/sepic-at-light-load", "input-filter/unstable-with-it"} {
			b.Run(depth.name+"/"+name, func(b *testing.B) {
				path := shelf + "/" + name + ".converter.yaml"
				text, err := os.ReadFile(path)
				require.NoError(b, err)
				c, _, err := Prepare(context.Background(), schema.Read(path, text, 0), folder{}, Settings{}, analysis.Options{Depth: depth.depth})
				require.NoError(b, err)
				b.ReportAllocs()
				b.ReportMetric(float64(len(c.Result.Corners)), "corners")
				for b.Loop() {
					Run(c, RunOptions{})
				}
			})
		}
	}
}

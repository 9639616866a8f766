package loop

import (
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis/transfer"
)

// TestSampledLoopAboveOneAtHalfItsSamplingFrequency holds loops that never come down to one to their exact poles in z: K/(1 − z⁻¹)
// has its pole at 1/(1 + K), inside the unit circle for every K > 0; K·z⁻¹/(1 − z⁻¹) has it at 1 − K, outside for K > 2.
func TestSampledLoopAboveOneAtHalfItsSamplingFrequency(t *testing.T) {
	for _, c := range []struct {
		name      string
		numerator []float64
		stable    bool
	}{
		{"no delay, K = 4, pole 0.2", []float64{4}, true},
		{"one sample's delay, K = 1.5, pole -0.5", []float64{0, 1.5}, true},
		{"one sample's delay, K = 4, pole -3", []float64{0, 4}, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			loop := transfer.Product{
				Function: transfer.Function{Gain: 1},
				Sampled:  &transfer.Sampled{Period: 1e-5, Numerator: c.numerator, Denominator: []float64{1, -1}},
			}
			var out Figures
			require.NoError(t, Measure(&loop, 1e5, &out))
			assert.Equal(t, c.stable, out.Stable, "%+v", out)
		})
	}
}

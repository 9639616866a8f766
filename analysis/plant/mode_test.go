package plant

import (
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestTheModeAloneIsTheModeOfTheSolution(t *testing.T) {
	r := newSampler(12)
	seen := map[Mode]int{}
	for range 100 {
		for _, topology := range Topologies() {
			c := r.circuit(topology)
			c.Synchronous = false
			c.LoadCurrent *= r.between(0.01, 1)
			var out Solution
			if Solve(&c, &out) == nil {
				assert.Equal(t, out.Mode, ModeOf(&c), "%v", topology)
				seen[out.Mode]++
			}
		}
	}
	assert.Greater(t, seen[Continuous], 100)
	assert.Greater(t, seen[Discontinuous], 100)
	c := r.circuit(Boost)
	c.OutputVoltage = 1000 * c.InputVoltage
	assert.Zero(t, ModeOf(&c), "out of reach")
	c.Phases = 0
	assert.Zero(t, ModeOf(&c), "no circuit")
}

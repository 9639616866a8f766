package analysis

import (
	"context"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// TestPanicInAWorkerComesBackAsAFault: a panic in a goroutine of the team must not end the process, and is told from a
// domain error.
func TestPanicInAWorkerComesBackAsAFault(t *testing.T) {
	for _, workers := range []int{1, 3} {
		team := &team{ctx: context.Background(), workers: make([]*worker, workers)}
		err := team.run(5, func(_ *worker, unit int) error {
			if unit == 3 {
				panic("a defect")
			}
			return nil
		})
		var fault *Fault
		require.ErrorAs(t, err, &fault)
		assert.Equal(t, "a defect", fault.Error())
		assert.Contains(t, string(fault.Stack), "team_test.go")
	}
}

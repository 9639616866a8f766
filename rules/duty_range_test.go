package rules

import (
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestUnreachableVoltagesSayWhy(t *testing.T) {
	circuit := caseOf(t, "internal/healthy-boost").circuit(nil)
	circuit.InputVoltage, circuit.OutputVoltage = 9, 8
	message, formula := unreachedWords(circuit)
	assert.Equal(t, "no duty reaches the output voltage 8.00 V: a boost gives no less than its input, 9.00 V on the output side", message)
	assert.Equal(t, "8.00 V < 9.00 V", formula)
	circuit.OutputVoltage = 300
	message, _ = unreachedWords(circuit)
	assert.Equal(t, "no duty reaches the output voltage 300 V: the losses leave less at every duty", message)
}

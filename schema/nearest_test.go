package schema

import (
	"testing"

	"github.com/stretchr/testify/assert"
)

func TestNamesNearOneAnother(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{{"", "", 0}, {"a", "", 1}, {"phase-margin", "phase-margin", 0}, {"phase-margn", "phase-margin", 1}, {"pahse-margin", "phase-margin", 1}, {"gain", "main", 1}, {"µs", "us", 1}} {
		assert.Equal(t, c.want, edits(c.a, c.b), "%s %s", c.a, c.b)
		assert.Equal(t, c.want, edits(c.b, c.a))
	}
}

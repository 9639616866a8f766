package lsp

import (
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
)

func TestHoverOnAPartTellsWhatItMovesOnceTheFullCheckHasLooked(t *testing.T) {
	path, text := lantern(t)
	k := connect(t, Options{}, check)
	k.begin(object{"pause": 1})
	uri := fileAddress(path)
	k.open(uri, text, 1)
	k.published(uri, 1, nil)
	var shown string
	for range 200 { // the full check follows the quick one
		got, _ := k.hoverAt(uri, on(t, text, "18 kΩ", 2))
		if shown = plainText(got); strings.Contains(shown, "1 % more moves") {
			break
		}
		time.Sleep(20 * time.Millisecond)
	}
	assert.Regexp(t, `1 % more moves the worst phase margin by [−+][0-9.]+°, .*the highest crossover by \+[0-9.]+ %`, shown)
	got, _ := k.hoverAt(uri, on(t, text, "output-voltage: 24 V", 17))
	assert.NotContains(t, plainText(got), "1 % more moves", "a condition of operation is no part")
	k.leave()
}

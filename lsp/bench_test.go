package lsp

import (
	"fmt"
	"sort"
	"strings"
	"testing"
	"time"
)

// report gives the percentiles that a user feels, in microseconds, by nearest rank.
func report(b *testing.B, took []time.Duration, per string) {
	sort.Slice(took, func(i, j int) bool { return took[i] < took[j] })
	for _, p := range []int{50, 95, 99} {
		at := took[max(0, (len(took)*p+99)/100-1)]
		b.ReportMetric(float64(at.Microseconds()), fmt.Sprintf("p%d-µs/%s", p, per))
	}
}

// BenchmarkEdit is a keystroke in a value to its diagnostics, in a server process of its own, through pipes. The value
// alternates, so that every text is analysed anew.
func BenchmarkEdit(b *testing.B) {
	path, text := lantern(b)
	k := spawn(b)
	k.begin(nil)
	uri := fileAddress(path)
	k.open(uri, text, 0)
	k.published(uri, 0, nil)
	i := strings.Index(text, "18 kΩ") + 1
	digit := area{placeOf(text, i, "utf-16"), placeOf(text, i+1, "utf-16")}
	var took []time.Duration
	for version := 1; b.Loop(); version++ {
		at := time.Now()
		k.change(uri, version, part(digit, []string{"7", "8"}[version%2]))
		took = append(took, k.last(uri, version).Sub(at))
	}
	report(b, took, "edit")
	k.leave()
}

// BenchmarkHover is a hover on a quantity, through pipes, with the text checked.
func BenchmarkHover(b *testing.B) {
	path, text := lantern(b)
	k := spawn(b)
	k.begin(nil)
	uri := fileAddress(path)
	k.open(uri, text, 0)
	k.published(uri, 0, nil)
	where := placeOf(text, strings.Index(text, "22 µH")+1, "utf-16")
	var took []time.Duration
	for b.Loop() {
		at := time.Now()
		id := k.ask("textDocument/hover", object{"textDocument": object{"uri": uri}, "position": where})
		took = append(took, k.answer(id).at.Sub(at))
	}
	report(b, took, "hover")
	k.leave()
}

// BenchmarkColdStart is a new process to the first diagnostics.
func BenchmarkColdStart(b *testing.B) {
	path, text := lantern(b)
	uri := fileAddress(path)
	var took []time.Duration
	for b.Loop() {
		at := time.Now()
		k := spawn(b)
		k.begin(nil)
		k.open(uri, text, 1)
		took = append(took, k.published(uri, 1, nil).at.Sub(at))
		k.leave()
	}
	report(b, took, "start")
}

// last waits for a version's publish as the newest one, and drops what came before: a benchmark keeps nothing.
func (k *client) last(uri string, version int) (at time.Time) {
	k.must("diagnostics", func() bool {
		for _, p := range k.pushes {
			if p.URI == uri && p.Version != nil && int(*p.Version) == version {
				at = p.at
				k.pushes = k.pushes[:0]
				return true
			}
		}
		return false
	})
	return at
}

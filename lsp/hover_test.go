package lsp

import (
	"regexp"
	"strings"
	"testing"
	"unicode/utf16"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

// on finds the place of a text in a document, some characters into it.
func on(t *testing.T, text, what string, into int) spot {
	t.Helper()
	i := strings.Index(text, what)
	require.GreaterOrEqual(t, i, 0, what)
	return placeOf(text, i+into, "utf-16")
}

// plainText takes the escapes out of Markdown.
func plainText(s string) string {
	return regexp.MustCompile(`\\([^a-zA-Z0-9])`).ReplaceAllString(s, "$1")
}

// opened gives a client with the lantern open and checked.
func opened(t *testing.T, text string) (*client, string) {
	path, _ := lantern(t)
	k := connect(t, Options{}, check)
	k.begin(nil)
	uri := fileAddress(path)
	k.open(uri, text, 1)
	k.published(uri, 1, nil)
	return k, uri
}

func TestHoverOnAQuantityTellsItsValueSpreadAndWhatItSets(t *testing.T) {
	_, text := lantern(t)
	k, uri := opened(t, text)
	for _, c := range []struct {
		name, at string
		into     int
		want     []string
		not      string
	}{
		{"inductance", "22 µH", 1, []string{"22.0 µH = 2.2e-05 H", "from 17.6 µH to 26.4 µH (−20 % to +20 %)", "sets resonance", "sets right-half-plane zero"}, "ESR zero"},
		{"its key", "inductance:", 3, []string{"22.0 µH = 2.2e-05 H", "sets resonance"}, ""},
		{"esr", "{min: 8 mΩ", 7, []string{"12.0 mΩ = 0.012 Ω", "from 8.00 mΩ to 25.0 mΩ", "sets ESR zero"}, "sets resonance"},
		{"capacitance", "220 µF", 1, []string{"sets resonance", "sets ESR zero"}, "right-half-plane"},
		{"feedback resistor", "18 kΩ", 1, []string{"18.0 kΩ", "sets the network's zero", "sets the network's pole"}, "resonance"},
		{"upper resistor", "100 kΩ", 1, []string{"sets the output voltage", "sets the network's integrator"}, ""},
		{"ramp", "1.8 V", 1, []string{"- 1.80 V\n", "sets modulator gain"}, "resonance"},
	} {
		t.Run(c.name, func(t *testing.T) {
			got, _ := k.hoverAt(uri, on(t, text, c.at, c.into))
			shown := plainText(got)
			for _, w := range c.want {
				assert.Contains(t, shown, w)
			}
			if c.not != "" {
				assert.NotContains(t, shown, c.not)
			}
		})
	}
	k.leave()
}

func TestHoverMarksTheValueThatItIsAbout(t *testing.T) {
	_, text := lantern(t)
	k, uri := opened(t, text)
	_, got := k.hoverAt(uri, on(t, text, "220 µF", 2))
	line := strings.Split(text, "\n")[got.Start.Line]
	units := utf16.Encode([]rune(line))
	assert.Equal(t, "220 µF ± 20 %", string(utf16.Decode(units[got.Start.Character:got.End.Character])))
	k.leave()
}

func TestHoverOnTopologyShowsTheIdealAndTheLossyFigures(t *testing.T) {
	_, text := lantern(t)
	k, uri := opened(t, text)
	got, _ := k.hoverAt(uri, on(t, text, "topology: boost", 12))
	shown := plainText(got)
	// 24 V from 12 V: the ideal duty is 1 − 12/24 (common practice); losses need more.
	assert.Regexp(t, `duty: 0\.500, 0\.5[0-9]+`, shown)
	for _, w := range []string{"resonance", "right-half-plane zero", "ESR zero", "control gain", "phase margin"} {
		assert.Contains(t, shown, w)
	}
	k.leave()
}

func TestHoverOnAFindingTellsTheRuleAndTheNumbers(t *testing.T) {
	_, text := lantern(t)
	k, uri := opened(t, text)
	got, _ := k.hoverAt(uri, on(t, text, "18 kΩ", 2))
	shown := plainText(got)
	assert.Contains(t, shown, "rhp-zero-crossover")
	assert.Contains(t, shown, "worst at ")
	assert.Contains(t, shown, "right-half-plane zero")
	k.leave()
}

func TestHoverOnARuleNameInAWaiverShowsTheCatalogueEntry(t *testing.T) {
	_, text := lantern(t)
	text += "waivers:\n  - {rule: phase-margin, reason: harbour trial, until: 2031-01-01}\n"
	k, uri := opened(t, text)
	got, _ := k.hoverAt(uri, on(t, text, "rule: phase-margin", 8))
	assert.Contains(t, plainText(got), "phase-margin")
	assert.Contains(t, got, "policy key")
	k.leave()
}

func TestHoverKeepsTheLastFiguresWhileTheTextIsBroken(t *testing.T) {
	_, text := lantern(t)
	k, uri := opened(t, text)
	broken := strings.Replace(text, "output-voltage: 24 V", "output-voltage: 24 [", 1)
	k.change(uri, 2, whole(broken))
	k.published(uri, 2, nil)
	got, _ := k.hoverAt(uri, on(t, broken, "22 µH", 1))
	assert.Contains(t, plainText(got), "22.0 µH")
	assert.Contains(t, plainText(got), "of the last text that could be checked")
	k.leave()
}

func TestHoverOnNothingIsNothing(t *testing.T) {
	_, text := lantern(t)
	k, uri := opened(t, text)
	for _, at := range []spot{on(t, text, "# The lantern", 5), on(t, text, "\n\ninductor", 1), {9999, 0}} {
		got, _ := k.hoverAt(uri, at)
		assert.Empty(t, got)
	}
	k.leave()
}

// TestTextFromAFileIsNoMarkup: nothing in a file becomes a link, an image or HTML in a hover.
func TestTextFromAFileIsNoMarkup(t *testing.T) {
	p := &page{markdown: true}
	p.title("<b>*x*", "")
	p.say("![a](http://station.example/x) <script> `code` \n# head")
	p.formula("a ` b `` c")
	got := p.text.String()
	assert.NotRegexp(t, `(^|[^\\])[<\[*]`, strings.ReplaceAll(got, "**", ""))
	assert.Contains(t, got, "``` a ` b `` c ```")
}

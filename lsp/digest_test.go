package lsp

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
	"unicode/utf16"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// digests is a checker that analyses nothing: its one finding carries a digest of the server's text and stands at its
// very end, so that a text or a position that has drifted shows in the published diagnostics.
func digests(_ context.Context, _ *workspace.Workspace, doc *schema.Document, o workspace.Options) workspace.File {
	severity := rules.Warning
	if o.Depth == analysis.Full {
		severity = rules.Note
	}
	return workspace.File{Document: doc, Findings: []rules.Finding{{
		Rule: "digest", Severity: severity, Message: digest(string(doc.Text)), Doc: doc, Start: len(doc.Text), End: len(doc.Text),
	}}}
}

func digest(text string) string {
	sum := sha256.Sum256([]byte(text))
	return hex.EncodeToString(sum[:8])
}

// model is the client's side of a document: runes, and positions counted by the standard library.
type model struct {
	runes    []rune
	encoding string
}

func (m *model) units(r rune) int {
	switch m.encoding {
	case "utf-8":
		return len(string(r))
	case "utf-32":
		return 1
	}
	return utf16.RuneLen(r)
}

// at is the position of the i-th rune.
func (m *model) at(i int) spot {
	var p spot
	for j := 0; j < i; j++ {
		switch r := m.runes[j]; {
		case r == '\n', r == '\r' && !(j+1 < len(m.runes) && m.runes[j+1] == '\n'):
			p.Line, p.Character = p.Line+1, 0
		case r == '\r':
		default:
			p.Character += m.units(r)
		}
	}
	return p
}

// inLineEnding tells whether the i-th place lies between "\r" and "\n", where no editor puts one.
func (m *model) inLineEnding(i int) bool {
	return i > 0 && i < len(m.runes) && m.runes[i-1] == '\r' && m.runes[i] == '\n'
}

// edit makes one random edit and gives it as the protocol's change.
func (m *model) edit(r *rand.Rand) object {
	pieces := []string{"", "", "x", "µ", "Ω", "°", "😀", "e\u0301", "漢", "\n", "\r\n", "\r", "22 µH ± 20 %\n", "# Ω🚢\n", "}", "\"", "\ufeff", "  "}
	start := r.IntN(len(m.runes) + 1)
	end := min(start+r.IntN(6), len(m.runes))
	for m.inLineEnding(start) {
		start--
	}
	for m.inLineEnding(end) {
		end++
	}
	with := pieces[r.IntN(len(pieces))]
	c := part(area{m.at(start), m.at(end)}, with)
	m.runes = slices.Concat(m.runes[:start], []rune(with), m.runes[end:])
	return c
}

const boat = "file:///station/boat.converter.yaml"

func TestThousandRandomEditsLeaveTheSameText(t *testing.T) {
	for _, encoding := range []string{"utf-16", "utf-8", "utf-32"} {
		t.Run(encoding, func(t *testing.T) {
			k := connect(t, Options{}, digests)
			k.begin(object{"pause": 60000}, encoding)
			r := rand.New(rand.NewPCG(7, 11))
			m := &model{[]rune("format: 1\ntitle: Tide gauge µ 😀 supply\ninductor: {inductance: 22 µH}\r\n# Ω\rlast °"), encoding}
			k.open(boat, string(m.runes), 0)
			version := 0
			for edits := 0; edits < 1000; version++ {
				var changes []object
				for range 1 + r.IntN(3) {
					changes = append(changes, m.edit(r))
					edits++
				}
				if r.IntN(50) == 0 { // now and then the whole text, also behind parts of one message
					m.runes = append(m.runes[:len(m.runes)/2:len(m.runes)/2], []rune("\nnew 😀\r\nend")...)
					changes = append(changes, whole(string(m.runes)))
				}
				k.change(boat, version+1, changes...)
				if version%20 == 0 {
					expectDigest(t, k, version+1, m)
				}
			}
			expectDigest(t, k, version, m)
			k.leave()
		})
	}
}

// expectDigest compares the server's text with the client's, and the place of its end, and then with a reading of the
// whole text as a document of its own.
func expectDigest(t *testing.T, k *client, version int, m *model) {
	t.Helper()
	got := k.published(boat, version, nil).Diagnostics
	require.Len(t, got, 1)
	require.Equal(t, digest(string(m.runes)), got[0].Message, "version %d", version)
	end := m.at(len(m.runes))
	require.Equal(t, area{end, end}, got[0].Range, "version %d", version)
	fresh := fmt.Sprintf("file:///station/fresh%d.converter.yaml", version)
	k.open(fresh, string(m.runes), 1)
	again := k.published(fresh, 1, nil).Diagnostics
	assert.Equal(t, again, got)
	k.close(fresh)
}

func TestEditInsideASurrogatePairKeepsTheTextWhole(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(nil)
	k.open(boat, "a😀b\n", 1)
	k.published(boat, 1, nil)
	k.change(boat, 2, part(area{spot{0, 2}, spot{0, 2}}, "x"))
	assert.Equal(t, digest("a😀xb\n"), k.published(boat, 2, nil).Diagnostics[0].Message)
	k.change(boat, 3, part(area{spot{0, 2}, spot{0, 4}}, ""))
	assert.Equal(t, digest("a😀b\n"), k.published(boat, 3, nil).Diagnostics[0].Message)
	k.leave()
}

func TestPlacesOutsideTheTextAreItsEnds(t *testing.T) {
	for _, c := range []struct {
		name string
		edit area
		want string
	}{
		{"column past the line", area{spot{0, 99}, spot{0, 4000000000}}, "ab!\ncd"},
		{"line past the text", area{spot{9, 0}, spot{4000000000, 7}}, "ab\ncd!"},
		{"end before start", area{spot{1, 1}, spot{0, 1}}, "a!d"},
	} {
		t.Run(c.name, func(t *testing.T) {
			k := connect(t, Options{}, digests)
			k.begin(nil)
			k.open(boat, "ab\ncd", 1)
			k.change(boat, 2, part(c.edit, "!"))
			assert.Equal(t, digest(c.want), k.published(boat, 2, nil).Diagnostics[0].Message)
			k.leave()
		})
	}
}

func TestChangeThatCannotBeReadIsRefusedWhole(t *testing.T) {
	for _, bad := range []string{
		`{"range":{"start":{"line":-1,"character":0},"end":{"line":0,"character":0}},"text":"x"}`,
		`{"range":{"start":{"line":1.5,"character":0},"end":{"line":0,"character":0}},"text":"x"}`,
		`{"range":{"start":{"line":0}},"text":"x"}`,
		`{"range":{"start":{"line":0,"character":0},"end":{"line":0,"character":0}}}`,
		`{"range":null}`,
		`7`,
	} {
		t.Run(bad, func(t *testing.T) {
			k := connect(t, Options{}, digests)
			k.begin(nil)
			k.open(boat, "one\n", 1)
			k.published(boat, 1, nil)
			k.send(`{"jsonrpc":"2.0","method":"textDocument/didChange","params":{"textDocument":{"uri":"` + boat +
				`","version":2},"contentChanges":[{"text":"two"},` + bad + `]}}`)
			k.cleared(boat)
			k.change(boat, 3, part(area{}, "lost "))
			k.change(boat, 4, whole("four"))
			assert.Equal(t, digest("four"), k.published(boat, 4, nil).Diagnostics[0].Message)
			for _, p := range k.pushed(boat) {
				assert.False(t, p.Version != nil && (*p.Version == 2 || *p.Version == 3), "published while out of step: %s", p.raw)
			}
			k.leave()
		})
	}
}

func TestWholeTextWithNullRangeIsTheWholeText(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(nil)
	k.open(boat, "one\n", 1)
	k.send(`{"jsonrpc":"2.0","method":"textDocument/didChange","params":{"textDocument":{"uri":"` + boat +
		`","version":2},"contentChanges":[{"range":null,"text":"two"}]}}`)
	assert.Equal(t, digest("two"), k.published(boat, 2, nil).Diagnostics[0].Message)
	k.leave()
}

// TestLinesEndAsTheProtocolSays compares the line table with a plain splitting of the text.
func TestLinesEndAsTheProtocolSays(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 5))
	for range 3000 {
		var b strings.Builder
		for range r.IntN(12) {
			b.WriteString([]string{"\r", "\n", "\r\n", "a", "😀", "µ"}[r.IntN(6)])
		}
		s := b.String()
		want := []int{0}
		for i := range len(s) {
			if s[i] == '\n' || s[i] == '\r' && !(i+1 < len(s) && s[i+1] == '\n') {
				want = append(want, i+1)
			}
		}
		require.Equal(t, want, newText([]byte(s)).lines, "%q", s)
	}
}

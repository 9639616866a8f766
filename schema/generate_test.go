package schema

import (
	"fmt"
	"strings"

	"pgregory.net/rapid"
)

// generated is a value of a generated text, with the range at which it was written.
type generated struct {
	kind       NodeKind
	start, end int
	typ        ScalarType
	value      string
	keys       []generatedKey
	items      []*generated
}

type generatedKey struct {
	text       string
	start, end int
	value      *generated
}

// generator writes a random document and notes what stands where.
type generator struct {
	*rapid.T
	strings.Builder
	eol string
}

func (w *generator) pick(label string, options ...string) string {
	return rapid.SampledFrom(options).Draw(w.T, label)
}

func (w *generator) chance(percent int, label string) bool {
	return rapid.IntRange(0, 99).Draw(w.T, label) < percent
}

func (w *generator) indent(n int) { w.WriteString(strings.Repeat(" ", n)) }

// comment writes the end of a line, now and then with a comment and empty lines.
func (w *generator) comment() {
	w.WriteString(w.pick("end of line", "", "", "", "", " ", "\t", " # bei 25 °C: µ", "\t# note, {with} [signs] 'and quotes\"", "  #"))
	w.WriteString(w.eol)
	w.WriteString(w.pick("between lines", "", "", "", w.eol, "# whole line: x"+w.eol, "      # deep"+w.eol, "  "+w.eol))
}

// plainTexts may stand without quotes everywhere; none of them is a number, a yes/no or nothing.
var plainTexts = []string{"buck", "22 µH ± 20 %", "4k7", "25 mΩ", "50°", "Gezeitenlabor", "it's", "a#b", "x:y", "-3 V", ".5.",
	"pier/7", "e\u0301clair", "🌊 boje", "say \"hi\"", "1e", "0x1G", "yes", "No", "12 V", "?x", ":x", "<b>", "a\\n", "v1.2-3", "12:30"}

// typed are texts without quotes that are no text.
var typed = map[string]ScalarType{"22e-6": Number, "1e-3": Number, ".5": Number, "0x1F": Number, "0o17": Number, "-7": Number, "+1.": Number, "1e999": Number,
	".nan": Number, "-.inf": Number, "true": Bool, "False": Bool, "null": Null, "~": Null}

// words are lines of a text that goes over several lines.
var words = []string{"tide", "gauge µ", "of the", "east pier", "Ω", "🛥", "n-th", "3 V"}

func (w *generator) lines(label string) []string {
	return rapid.SliceOfN(rapid.SampledFrom(words), 1, 4).Draw(w.T, label)
}

// scalar writes a value of text in any style that may stand here. n is the indentation that further lines must exceed.
func (w *generator) scalar(n int, flow bool) *generated {
	s := &generated{kind: Scalar, start: w.Len(), typ: Text}
	styles := []string{"plain", "plain", "typed", "single", "double", "lines", "single lines", "double lines"}
	if !flow {
		styles = append(styles, "literal", "folded")
	}
	switch style := w.pick("style", styles...); style {
	case "plain":
		s.value = w.pick("plain", plainTexts...)
		if flow && strings.ContainsAny(s.value, "?:") {
			s.value = "dock"
		}
		w.WriteString(s.value)
	case "typed":
		keys := []string{"22e-6", "1e-3", ".5", "0x1F", "0o17", "-7", "+1.", "1e999", ".nan", "-.inf", "true", "False", "null", "~"}
		s.value = w.pick("typed", keys...)
		s.typ = typed[s.value]
		w.WriteString(s.value)
	case "single":
		s.value = w.pick("single", append(plainTexts, "", "a: b", "# x", "{", "''", "12", " x ")...)
		w.WriteString("'" + strings.ReplaceAll(s.value, "'", "''") + "'")
	case "double":
		s.value = w.pick("double", append(plainTexts, "", "a: b", "tab\there", "line\nend", "quote\"s", "\\", "\u2028", "\x00", " x ")...)
		w.double(s.value)
	case "lines":
		w.folded(s, n, "", "")
	case "single lines":
		w.folded(s, n, "'", "'")
	case "double lines":
		w.folded(s, n, "\"", "\"")
	default:
		w.block(s, n, style)
		return s
	}
	s.end = w.Len()
	return s
}

// double writes a text in double quotes, each character as itself or escaped.
func (w *generator) double(text string) {
	w.WriteByte('"')
	for _, r := range text {
		short := strings.IndexRune("\"\\\n\t\x00", r)
		switch {
		case short >= 0:
			w.WriteString([]string{`\"`, `\\`, `\n`, `\t`, `\0`}[short])
		case r > 0xffff && w.chance(50, "long escape"):
			fmt.Fprintf(w, `\U%08X`, r)
		case r <= 0xffff && w.chance(15, "escape"):
			fmt.Fprintf(w, `\u%04x`, r)
		default:
			w.WriteRune(r)
		}
	}
	w.WriteByte('"')
}

// folded writes a text over several lines between two quotes, or none.
func (w *generator) folded(s *generated, n int, open, closing string) {
	w.WriteString(open)
	for i, line := range w.lines("lines") {
		if i > 0 {
			w.WriteString(w.pick("before the line end", "", " ", "\t"))
			empty := rapid.IntRange(0, 2).Draw(w.T, "empty lines")
			for range empty + 1 {
				w.WriteString(w.eol)
			}
			w.indent(n + 1 + rapid.IntRange(0, 3).Draw(w.T, "deeper"))
			s.value += map[bool]string{true: " ", false: strings.Repeat("\n", empty)}[empty == 0]
		}
		w.WriteString(line)
		s.value += line
	}
	w.WriteString(closing)
	if open == "" && s.value == "" {
		s.typ = Null
	}
}

// block writes a text behind | or >, up to but without its last line end.
func (w *generator) block(s *generated, n int, style string) {
	chomp := w.pick("chomp", "", "-", "+")
	w.WriteString(map[string]string{"literal": "|", "folded": ">"}[style] + chomp)
	w.WriteString(w.pick("behind the header", "", " ", " # comment"))
	deep := max(n, 0) + rapid.IntRange(1, 3).Draw(w.T, "depth")
	for i, line := range w.lines("block lines") {
		w.WriteString(w.eol)
		w.indent(deep)
		w.WriteString(line)
		if i > 0 {
			s.value += map[string]string{"literal": "\n", "folded": " "}[style]
		}
		s.value += line
	}
	s.end = w.Len()
	if chomp != "-" {
		s.value += "\n"
	}
	w.WriteString(w.eol) // the comment that the caller writes is outside: a line end alone ends the text
	w.WriteString("#")
}

// key writes a key that is new in its mapping.
func (w *generator) key(taken map[string]bool) generatedKey {
	k := generatedKey{text: w.pick("key", "a", "input-voltage", "µ", "x y", "🛥", "n", "q'r", "22")}
	for taken[k.text] {
		k.text += "1"
	}
	taken[k.text] = true
	k.start = w.Len()
	switch w.pick("key style", "plain", "plain", "single", "double") {
	case "plain":
		w.WriteString(k.text)
	case "single":
		w.WriteString("'" + strings.ReplaceAll(k.text, "'", "''") + "'")
	case "double":
		w.double(k.text)
	}
	k.end = w.Len()
	w.WriteString(w.pick("before the colon", "", "", " "))
	w.WriteString(":")
	return k
}

// gap writes what may stand between the members of brackets.
func (w *generator) gap(n int) {
	if w.chance(20, "line end in brackets") {
		w.WriteString(w.pick("comment in brackets", "", " # no ] here }"))
		w.WriteString(w.eol)
		w.indent(n + 1)
		w.WriteString(w.pick("tab in brackets", "", "\t"))
	}
	w.WriteString(w.pick("gap", "", " ", "\t"))
}

// flow writes a mapping or list in brackets.
func (w *generator) flow(n, depth int) *generated {
	s := &generated{start: w.Len(), kind: Sequence}
	isMap := w.chance(50, "braces")
	open, closing := "[", "]"
	if isMap {
		s.kind, open, closing = Mapping, "{", "}"
	}
	w.WriteString(open)
	taken := map[string]bool{}
	count := rapid.IntRange(0, 3).Draw(w.T, "members")
	for i := range count {
		w.gap(n)
		if isMap {
			k := w.key(taken)
			w.WriteString(" ")
			w.gap(n)
			k.value = w.flowMember(n, depth)
			s.keys = append(s.keys, k)
		} else {
			s.items = append(s.items, w.flowMember(n, depth))
		}
		w.gap(n)
		if i < count-1 || w.chance(10, "comma at the end") {
			w.WriteString(",")
		}
	}
	w.gap(n)
	w.WriteString(closing)
	s.end = w.Len()
	return s
}

func (w *generator) flowMember(n, depth int) *generated {
	if depth > 0 && w.chance(25, "nested brackets") {
		return w.flow(n, depth-1)
	}
	return w.scalar(n, true)
}

// value writes what stands behind a key or a dash, and the end of its line.
func (w *generator) value(n, depth int, afterDash bool) *generated {
	switch what := rapid.IntRange(0, 9).Draw(w.T, "what"); {
	case what < 2 && depth > 0:
		w.WriteString(w.eol)
		if w.chance(20, "comment before") {
			w.WriteString("# before" + w.eol)
		}
		return w.structure(n+rapid.IntRange(1, 4).Draw(w.T, "step"), depth-1)
	case what == 2 && depth > 0 && afterDash:
		w.WriteString(" ")
		return w.compact(n+2, depth-1)
	case what == 3:
		s := &generated{kind: Scalar, start: w.Len(), end: w.Len(), typ: Null}
		w.comment()
		return s
	case what == 4:
		w.WriteString(" ")
		s := w.flow(n, 2)
		w.comment()
		return s
	}
	w.WriteString(w.pick("before the value", " ", "  ", "\t"))
	s := w.scalar(n, false)
	w.comment()
	return s
}

// structure writes a mapping or list of block structure with column n, from the start of a line.
func (w *generator) structure(n, depth int) *generated {
	w.indent(n)
	return w.compact(n, depth)
}

// compact is structure from its first sign on.
func (w *generator) compact(n, depth int) *generated {
	s := &generated{start: w.Len(), kind: Mapping}
	if w.chance(35, "list") {
		s.kind = Sequence
	}
	taken := map[string]bool{}
	for i := range rapid.IntRange(1, 4).Draw(w.T, "entries") {
		if i > 0 {
			w.indent(n)
		}
		var v *generated
		if s.kind == Sequence {
			w.WriteString("-")
			s.end = w.Len()
			v = w.value(n, depth, true)
			s.items = append(s.items, v)
		} else {
			k := w.key(taken)
			s.end = w.Len()
			v = w.value(n, depth, false)
			k.value = v
			s.keys = append(s.keys, k)
		}
		s.end = max(s.end, v.end)
	}
	return s
}

// generateYAML writes a whole document whose top is a mapping.
func generateYAML(t *rapid.T) (text string, root *generated) {
	w := &generator{T: t, eol: rapid.SampledFrom([]string{"\n", "\r\n", "\r"}).Draw(t, "line end")}
	if w.chance(20, "byte-order mark") {
		w.WriteString(byteOrderMark)
	}
	if w.chance(20, "document start") {
		w.WriteString("%YAML 1.2" + w.eol + "---" + w.eol)
	}
	if w.chance(20, "head") {
		w.comment()
	}
	root = w.top()
	return w.String(), root
}

// top writes the entries of the whole document.
func (w *generator) top() *generated {
	s := &generated{start: w.Len(), kind: Mapping}
	taken := map[string]bool{}
	for range rapid.IntRange(1, 4).Draw(w.T, "top entries") {
		k := w.key(taken)
		s.end = w.Len()
		k.value = w.value(0, 3, false)
		s.end = max(s.end, k.value.end)
		s.keys = append(s.keys, k)
	}
	return s
}

package report

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"
)

// safe makes a text from a file harmless for a terminal: control characters, the invisible ones that turn the writing
// direction and bytes that are no UTF-8 are shown as what they are instead of being obeyed.
func safe(s string) string {
	if !strings.ContainsFunc(s, unsafe) && utf8.ValidString(s) {
		return s
	}
	var b strings.Builder
	for i := 0; i < len(s); {
		r, size := utf8.DecodeRuneInString(s[i:])
		switch {
		case r == utf8.RuneError && size == 1:
			fmt.Fprintf(&b, `\x%02x`, s[i])
		case r < 0x80 && unsafe(r):
			fmt.Fprintf(&b, `\x%02x`, r)
		case unsafe(r):
			fmt.Fprintf(&b, `\u%04x`, r)
		default:
			b.WriteRune(r)
		}
		i += size
	}
	return b.String()
}

// unsafe tells the characters that a terminal would act on: categories Cc, Cf (which has the bidirectional controls), and
// the line and paragraph separators.
func unsafe(r rune) bool {
	return unicode.In(r, unicode.Cc, unicode.Cf, unicode.Zl, unicode.Zp)
}

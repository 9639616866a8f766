package schema

import (
	"bytes"
	"unicode/utf8"
)

// byteProblemLimit is how many wrong bytes are named before the file is taken for no text at all.
const byteProblemLimit = 20

// bomLength is the length of a byte-order mark at the start of a text.
func bomLength(text []byte) int {
	if bytes.HasPrefix(text, []byte(byteOrderMark)) {
		return len(byteOrderMark)
	}
	return 0
}

// bytes reports what is no text: bytes that are not UTF-8, and control characters. It is false when there is no point
// in reading on.
func (t *tree) bytes() bool {
	if utf16Text(t.src) {
		t.report(0, 0, "the file is UTF-16 text and must be UTF-8")
		return false
	}
	for i := 0; i < len(t.src); {
		b := t.src[i]
		if b >= ' ' && b < 0x7f || b == '\n' || b == '\r' || b == '\t' {
			i++
			continue
		}
		r, size := utf8.DecodeRuneInString(t.src[i:])
		switch {
		case r == utf8.RuneError && size == 1:
			t.report(i, i+1, "the byte 0x%02X is not UTF-8 text", b)
		case isControl(r):
			t.report(i, i+size, "the control character U+%04X has no place in a spec file", r)
		}
		if len(t.problems) >= byteProblemLimit {
			return false
		}
		i += size
	}
	return true
}

// isControl is true for the C0 and C1 controls and DEL, less tab, the line ends and U+0085, as YAML 1.2.2 section 5.1
// leaves them out of the printable characters.
func isControl(r rune) bool {
	return r < ' ' && r != '\t' && r != '\n' && r != '\r' || r >= 0x7f && r < 0xa0 && r != 0x85
}

// utf16Text is true for a text with a byte-order mark of UTF-16.
func utf16Text(text string) bool {
	return len(text) >= 2 && (text[:2] == "\xff\xfe" || text[:2] == "\xfe\xff")
}

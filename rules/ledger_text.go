package rules

import (
	"bytes"
	"cmp"
	"fmt"
	"math"
	"net/url"
	"slices"
	"strconv"
	"strings"
)

// ledgerHead is the first line of every ledger; the number is that of the format.
const ledgerHead = "# halfplane ledger 1"

// ledgerLines explain the file to whoever opens it.
const ledgerLines = ledgerHead + `
# Findings that are on record. 'halfplane check --ledger FILE' accepts them and counts only what is new or worse.
# One line each: file, rule, place, kind, severity, measured, limit, unit; tabs between them, - for nothing.
`

// Text is the ledger as it is kept: a line for each finding, sorted, nothing that changes with the day or the number of lines, so that two
// branches merge line by line.
func (l *Ledger) Text() []byte {
	var all []Record
	for _, records := range l.entries {
		all = append(all, records...)
	}
	slices.SortFunc(all, func(a, b Record) int {
		return cmp.Or(cmp.Compare(a.Path, b.Path), cmp.Compare(a.Rule, b.Rule), cmp.Compare(a.Pointer, b.Pointer), cmp.Compare(a.Kind, b.Kind),
			worst(a, b), cmp.Compare(a.Measured, b.Measured), cmp.Compare(a.Limit, b.Limit), cmp.Compare(a.Unit, b.Unit))
	})
	var out bytes.Buffer
	out.WriteString(ledgerLines)
	for _, r := range all {
		fields := []string{escaped(r.Path), r.Rule, escaped(r.Pointer), escaped(r.Kind), r.Severity.String(), figureText(r.Measured), figureText(r.Limit), escaped(r.Unit)}
		for i, field := range fields {
			if field == "" {
				fields[i] = "-"
			}
		}
		out.WriteString(strings.Join(fields, "\t") + "\n")
	}
	return out.Bytes()
}

// figureText keeps six digits, more than any comparison needs.
func figureText(v float64) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return ""
	}
	return strconv.FormatFloat(v, 'g', 6, 64)
}

// escaped writes what would break a line, or look like nothing or a comment, in the manner of URLs.
func escaped(s string) string {
	if s == "-" || strings.HasPrefix(s, "#") || strings.HasPrefix(s, " ") || strings.HasPrefix(s, "<") || strings.HasPrefix(s, "=") || strings.HasPrefix(s, ">") {
		return fmt.Sprintf("%%%02X", s[0]) + escaped(s[1:])
	}
	var b strings.Builder
	for _, r := range []byte(s) {
		if r < ' ' || r == 0x7f || r == '%' {
			fmt.Fprintf(&b, "%%%02X", r)
			continue
		}
		b.WriteByte(r)
	}
	return b.String()
}

// ReadLedger reads a ledger's text. Lines that begin with # are comments. The error says where the text is no ledger: name:line:column.
func ReadLedger(name string, text []byte) (*Ledger, error) {
	l := NewLedger()
	lines := strings.Split(strings.TrimPrefix(string(text), "\ufeff"), "\n")
	if strings.TrimRight(lines[0], "\r \t") != ledgerHead {
		return nil, fmt.Errorf("%s:1:1: this is no ledger: the first line is not %q", name, ledgerHead)
	}
	for i, line := range lines[1:] {
		line = strings.TrimRight(line, "\r \t")
		if line == "" || line[0] == '#' {
			continue
		}
		r, column, err := readRecord(line)
		if err != nil {
			return nil, fmt.Errorf("%s:%d:%d: %w", name, i+2, column, err)
		}
		l.entries[r.Path] = append(l.entries[r.Path], r)
	}
	return l, nil
}

// readRecord reads one line; column is where it is wrong.
func readRecord(line string) (r Record, column int, err error) {
	for _, mark := range []string{"<<<<<<<", "=======", ">>>>>>>", "|||||||"} {
		if strings.HasPrefix(line, mark) {
			return r, 1, fmt.Errorf("a merge was left unfinished here (%s): keep the lines of both sides and take the marks out", mark)
		}
	}
	fields := strings.Split(line, "\t")
	if len(fields) != 8 {
		return r, 1, fmt.Errorf("expected 8 fields with tabs between them (file, rule, place, kind, severity, measured, limit, unit), found %d", len(fields))
	}
	column = 1
	for i, field := range fields {
		if err = r.take(i, field); err != nil {
			return r, column, err
		}
		column += len([]rune(field)) + 1
	}
	return r, 0, nil
}

// take reads the field at an index.
func (r *Record) take(i int, field string) (err error) {
	if field == "-" {
		field = ""
	}
	text, err := url.PathUnescape(field)
	if err != nil {
		return fmt.Errorf("%q has a %% that two hexadecimal digits should follow", field)
	}
	switch i {
	case 0:
		r.Path = text
		if text == "" {
			return fmt.Errorf("the file is missing")
		}
	case 1:
		r.Rule = text
		if Find(text) == nil {
			return fmt.Errorf("there is no rule %q", text)
		}
	case 2:
		r.Pointer = text
	case 3:
		r.Kind = text
	case 4:
		var known bool
		if r.Severity, known = ParseSeverity(text); !known || r.Severity == None {
			return fmt.Errorf("the severity is error, warning or note, not %q", text)
		}
	case 5:
		r.Measured, err = figureOf(text)
	case 6:
		r.Limit, err = figureOf(text)
	case 7:
		r.Unit = text
	}
	return err
}

func figureOf(text string) (float64, error) {
	if text == "" {
		return math.NaN(), nil
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsInf(v, 0) || math.IsNaN(v) {
		return 0, fmt.Errorf("%q is no number", text)
	}
	return v, nil
}

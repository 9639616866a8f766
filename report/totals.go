package report

import (
	"fmt"
	"strings"

	"halfplane/rules"
	"halfplane/workspace"
)

// Totals counts files and findings; consequences are not counted, since one cause is one finding. Waived findings are
// counted as such only.
type Totals struct {
	Files      int `json:"files"`
	Unreadable int `json:"unreadable"`
	Errors     int `json:"error"`
	Warnings   int `json:"warning"`
	Notes      int `json:"note"`
	Waived     int `json:"waived"`
	Recorded   int `json:"recorded,omitempty"` // of the errors, warnings and notes, those that a ledger has on record
}

// Add counts one file.
func (t *Totals) Add(f workspace.File) {
	t.Files++
	if f.Status == workspace.Unreadable {
		t.Unreadable++
	}
	for _, found := range f.Findings {
		if found.Cause != nil {
			continue
		}
		if found.Waiver != nil {
			t.Waived++
			continue
		}
		if found.Recorded {
			t.Recorded++
		}
		switch found.Severity {
		case rules.Error:
			t.Errors++
		case rules.Warning:
			t.Warnings++
		case rules.Note:
			t.Notes++
		}
	}
}

// Words is the line of totals: "3 files: 1 error, 2 warnings".
func (t Totals) Words() string {
	var found []string
	for _, c := range []struct {
		n    int
		word string
	}{{t.Errors, "error"}, {t.Warnings, "warning"}, {t.Notes, "note"}} {
		if c.n > 0 {
			found = append(found, plural(c.n, c.word))
		}
	}
	if t.Waived > 0 {
		found = append(found, fmt.Sprintf("%d waived", t.Waived))
	}
	if len(found) == 0 {
		found = []string{"no findings"}
	}
	head := plural(t.Files, "file")
	if t.Unreadable > 0 {
		head += fmt.Sprintf(" (%d not analysed)", t.Unreadable)
	}
	words := head + ": " + strings.Join(found, ", ")
	if t.Recorded > 0 {
		words += fmt.Sprintf("; %d of them on record in the ledger, %d new or worse", t.Recorded, t.Errors+t.Warnings+t.Notes-t.Recorded)
	}
	return words
}

// plural is "1 file", "2 files".
func plural(n int, word string) string {
	if n == 1 {
		return "1 " + word
	}
	return fmt.Sprintf("%d %ss", n, word)
}

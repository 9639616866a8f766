package report

import (
	"errors"
	"strings"

	"halfplane/schema"
)

// largestText bounds what a stand-in may take; no spec file is larger than half of it.
const largestText = 8 << 20

var errBeyondFiles = errors.New("a range lies beyond the end of any spec file")

// shapes collects how long the lines of some texts must at least be, by the files' names.
type shapes map[string][]int

// reach makes room for a position.
func (s shapes) reach(name string, at positionOut) error {
	if at.Line < 1 || at.Column < 1 || at.Line > largestText || at.Column > largestText {
		return errBeyondFiles
	}
	lines := s[name]
	for len(lines) < at.Line {
		lines = append(lines, 1)
	}
	lines[at.Line-1] = max(lines[at.Line-1], at.Column)
	s[name] = lines
	return nil
}

// standIns makes, for each text, one of the same shape: what is said about a place in it can be written again without the text itself.
func (s shapes) standIns() (map[string]*schema.Document, error) {
	docs := map[string]*schema.Document{}
	size := 0
	for name, lines := range s {
		var b strings.Builder
		for _, width := range lines {
			if size += width; size > largestText {
				return nil, errBeyondFiles
			}
			b.WriteString("#" + strings.Repeat(" ", width-1) + "\n")
		}
		docs[name] = schema.Read(name, []byte(b.String()), 0)
	}
	return docs, nil
}

// bytesOf is a range in a stand-in.
func bytesOf(doc *schema.Document, r rangeOut) (start, end int) {
	return doc.Offset(schema.Position{Line: r.Start.Line, Column: r.Start.Column}), doc.Offset(schema.Position{Line: r.End.Line, Column: r.End.Column})
}

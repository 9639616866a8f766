package main

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"halfplane/rules"
	"halfplane/workspace"
)

// ledger is the flags --ledger FILE and --ledger-renew, and the ledger while files are checked.
type ledger struct {
	path    string
	renew   choice
	folder  string // absolute, of the file
	kept    *rules.Ledger
	stale   int
	renewal rules.Renewal
}

func (l *ledger) declare(cmd *cobra.Command) {
	l.renew = choice{"", []string{"shrink", "all"}}
	cmd.Flags().StringVar(&l.path, "ledger", "", "`FILE` with findings that are on record: they are accepted, and only what is new or worse counts")
	cmd.Flags().Var(&l.renew, "ledger-renew", "rewrite the ledger: shrink (take out what no longer occurs, tighten what got better) or all (put on record what is found now, too)")
	cmd.Flag("ledger-renew").NoOptDefVal = "shrink"
}

// open reads the ledger that was asked for.
func (l *ledger) open() error {
	if l.path == "" {
		if l.renew.value != "" {
			return errors.New("--ledger-renew belongs to --ledger FILE, which is not given")
		}
		return nil
	}
	abs, err := filepath.Abs(l.path)
	if err != nil {
		return fmt.Errorf("--ledger: %w", err)
	}
	l.folder = filepath.Dir(abs)
	text, err := os.ReadFile(l.path)
	switch {
	case errors.Is(err, fs.ErrNotExist) && l.renew.value == "all":
		l.kept = rules.NewLedger()
		return nil
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("--ledger: there is no file %s; 'halfplane check --ledger %s --ledger-renew=all' puts on record what is found now", l.path, l.path)
	case err != nil:
		return fmt.Errorf("--ledger: %w", err)
	}
	l.kept, err = rules.ReadLedger(filepath.ToSlash(l.path), text)
	return err
}

// match marks the findings of one file that are on record, and brings its entries up to date.
func (l *ledger) match(f workspace.File) {
	if l.kept == nil || f.Status == workspace.Unreadable || f.Defect { // what was not analysed is neither accepted nor gone
		return
	}
	path := l.nameOf(f.Path)
	judged := func(rule string) bool {
		return slices.ContainsFunc(f.Outcomes, func(o rules.Outcome) bool { return o.Rule.Name == rule })
	}
	for _, e := range l.kept.Match(path, f.Findings) {
		if judged(e.Rule) {
			l.stale++
		}
	}
	if l.renew.value == "" {
		return
	}
	r := l.kept.Renew(path, f.Findings, judged, l.renew.value == "all")
	l.renewal.Removed += r.Removed
	l.renewal.Tightened += r.Tightened
	l.renewal.Added += r.Added
	l.renewal.Loosened += r.Loosened
	if l.renew.value == "all" {
		l.accept(path, f.Findings)
	}
}

// accept marks what has just been put on record.
func (l *ledger) accept(path string, findings []rules.Finding) {
	for i := range findings {
		findings[i].Record, findings[i].Recorded = nil, false
	}
	l.kept.Match(path, findings)
}

// nameOf is a file's path on the ledger: relative to the ledger's own folder, whatever folder the program runs in.
func (l *ledger) nameOf(path string) string {
	abs, err := filepath.Abs(filepath.FromSlash(path))
	if err != nil {
		return path
	}
	rel, err := filepath.Rel(l.folder, abs)
	if err != nil {
		return filepath.ToSlash(abs)
	}
	return filepath.ToSlash(rel)
}

// close writes the renewed ledger and says what has become of it.
func (l *ledger) close(errs io.Writer) error {
	switch {
	case l.kept == nil:
		return nil
	case l.renew.value == "":
		if l.stale > 0 {
			fmt.Fprintf(errs, "halfplane: %s of %s no longer found; --ledger-renew takes out what is settled\n", count(l.stale, "entry", "entries"), l.path)
		}
		return nil
	}
	for _, path := range l.kept.Paths() {
		if _, err := os.Stat(filepath.Join(l.folder, filepath.FromSlash(path))); errors.Is(err, fs.ErrNotExist) {
			l.renewal.Removed += l.kept.Drop(path)
		}
	}
	text := l.kept.Text()
	if old, err := os.ReadFile(l.path); err != nil || string(old) != string(text) {
		if err := workspace.WriteFile(l.path, func(w io.Writer) error { _, err := w.Write(text); return err }); err != nil {
			return err
		}
	}
	fmt.Fprintf(errs, "halfplane: %s: %s\n", l.path, l.words())
	return nil
}

func (l *ledger) words() string {
	var words []string
	for _, c := range []struct {
		n    int
		what string
	}{{l.renewal.Removed, "taken out"}, {l.renewal.Tightened, "tightened"}, {l.renewal.Added, "added"}, {l.renewal.Loosened, "recorded as worse"}} {
		if c.n > 0 {
			words = append(words, fmt.Sprintf("%d %s", c.n, c.what))
		}
	}
	if len(words) == 0 {
		words = []string{"nothing changed"}
	}
	return strings.Join(words, ", ") + "; " + count(l.kept.Len(), "finding", "findings") + " on record"
}

// count is "1 entry", "2 entries".
func count(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

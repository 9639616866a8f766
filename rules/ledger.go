package rules

import (
	"cmp"
	"math"
	"slices"
)

// Ledger is the findings that a team has on record: they are known, and only what is new or worse counts. A finding is known
// again by its file, rule, pointer and kind, so that lines can move; by how much it breaks its limit it is compared.
type Ledger struct{ entries map[string][]Record } // by the file's path

// Record is one finding on the ledger.
type Record struct {
	Path, Rule, Pointer, Kind string
	Severity                  Severity
	Measured, Limit           float64 // NaN where the finding has none
	Unit                      string
}

// NewLedger is an empty one.
func NewLedger() *Ledger { return &Ledger{map[string][]Record{}} }

// Len is the number of findings on record.
func (l *Ledger) Len() int {
	n := 0
	for _, records := range l.entries {
		n += len(records)
	}
	return n
}

// Paths are the files that have something on record, in order.
func (l *Ledger) Paths() []string {
	paths := make([]string, 0, len(l.entries))
	for path, records := range l.entries {
		if len(records) > 0 {
			paths = append(paths, path)
		}
	}
	slices.Sort(paths)
	return paths
}

// recordable says whether a finding can be put on record. What a waiver covers is on record already; the rules about waivers
// and defects of the program are settled, not accepted.
func recordable(f *Finding) bool { return f.Waiver == nil && !unwaivable(f.Rule) && f.Severity > None }

// recordOf is a finding as it is put on record.
func recordOf(path string, f *Finding) Record {
	r := Record{Path: path, Rule: f.Rule, Pointer: f.Pointer, Kind: f.Kind(), Severity: f.Severity, Measured: math.NaN(), Limit: math.NaN()}
	if f.Measured != nil {
		r.Measured, r.Unit = f.Measured.Value, f.Measured.Unit
	}
	if f.Limit != nil {
		r.Limit, r.Unit = f.Limit.Value, f.Limit.Unit
	}
	return r
}

// sameFinding says whether two records are about one finding.
func (r Record) sameFinding(o Record) bool {
	return r.Path == o.Path && r.Rule == o.Rule && r.Pointer == o.Pointer && r.Kind == o.Kind
}

// excess is how far the figure lies beyond its limit, NaN where there is no figure.
func (r Record) excess() float64 { return math.Abs(r.Measured - r.Limit) }

// driftBand is the part of a figure, or of its limit where that is larger, by which a finding may get worse unnoticed: what a later version
// of the program or a rounded part value changes. It is always counted from the record, so that many small steps do not pass.
const driftBand = 0.01

// worse says whether a finding is worse than it is on record: more severe, or farther beyond its limit, or with a figure that
// ceased to exist.
func (r Record) worse(than Record) bool {
	switch {
	case r.Severity != than.Severity:
		return r.Severity > than.Severity
	case math.IsNaN(than.excess()):
		return false
	case math.IsNaN(r.excess()):
		return true
	}
	return r.excess() > than.excess()+driftBand*math.Max(math.Abs(than.Measured), math.Abs(than.Limit))
}

// worst orders records of one finding, the worst first.
func worst(a, b Record) int {
	return cmp.Or(cmp.Compare(b.Severity, a.Severity), cmp.Compare(b.excess(), a.excess()))
}

// Match says, for each finding of the file at a path, what the ledger has on record of it: accepted findings are marked as recorded, worsened
// ones get the record that they are compared with. unmatched are the entries that nothing answers to any more. Several findings of one
// rule, place and kind are matched worst to worst.
func (l *Ledger) Match(path string, findings []Finding) (unmatched []Record) {
	left := slices.Clone(l.entries[path])
	slices.SortStableFunc(left, worst)
	order := make([]int, 0, len(findings))
	for i := range findings {
		if recordable(&findings[i]) {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int { return worst(recordOf(path, &findings[a]), recordOf(path, &findings[b])) })
	for _, i := range order {
		now := recordOf(path, &findings[i])
		at := slices.IndexFunc(left, now.sameFinding)
		if at < 0 {
			continue
		}
		was := left[at]
		left = slices.Delete(left, at, at+1)
		findings[i].Record = &was
		findings[i].Recorded = !now.worse(was)
	}
	return left
}

// Renewal is what renewing a ledger changed.
type Renewal struct{ Removed, Tightened, Added, Loosened int }

// Renew brings the entries of one file up to date after Match: those that no longer occur go, unless their rule was not judged; accepted ones
// take the figures of today where these are better. With all, what is new or worse is put on record too; else the ledger only
// shrinks.
func (l *Ledger) Renew(path string, findings []Finding, judged func(rule string) bool, all bool) (r Renewal) {
	var kept []Record
	for _, e := range l.entries[path] {
		if !judged(e.Rule) {
			kept = append(kept, e)
		}
	}
	before := len(l.entries[path]) - len(kept)
	for i := range findings {
		f := &findings[i]
		now := recordOf(path, f)
		switch {
		case !recordable(f):
			continue
		case f.Record == nil && !all:
			continue
		case f.Record == nil:
			r.Added++
		case now.better(*f.Record):
			before--
			r.Tightened++
		default:
			before--
			if all && !f.Recorded {
				r.Loosened++
			} else {
				now = *f.Record
			}
		}
		kept = append(kept, now)
	}
	r.Removed = before
	l.set(path, kept)
	return r
}

// better is the opposite of worse, beyond the band.
func (r Record) better(than Record) bool { return than.worse(r) }

// Drop takes a file off the ledger and says how many entries it had.
func (l *Ledger) Drop(path string) int {
	n := len(l.entries[path])
	delete(l.entries, path)
	return n
}

func (l *Ledger) set(path string, records []Record) {
	if len(records) == 0 {
		delete(l.entries, path)
		return
	}
	l.entries[path] = records
}

package rules

import (
	"math"
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func marginAt(degrees float64) Finding {
	return Finding{Rule: "phase-margin", Pointer: "/targets/phase-margin", Severity: Error, Measured: &Number{degrees, "deg"}, Limit: &Number{45, "deg"}}
}

// recorded puts findings of shelf/a on a ledger, through its text.
func recorded(t *testing.T, findings ...Finding) *Ledger {
	t.Helper()
	l := NewLedger()
	l.Renew("shelf/a", findings, func(string) bool { return true }, true)
	again, err := ReadLedger("known.ledger", l.Text())
	require.NoError(t, err)
	assert.Equal(t, string(l.Text()), string(again.Text()))
	return again
}

func TestWhatIsOnRecordIsAcceptedUnlessItGotWorse(t *testing.T) {
	for _, tt := range []struct {
		name     string
		was, now Finding
		accepted bool
	}{
		{"the same", marginAt(41.2), marginAt(41.2), true},
		{"a last digit", marginAt(41.2), marginAt(41.05), true},
		{"two degrees less", marginAt(41.2), marginAt(39.2), false},
		{"better", marginAt(41.2), marginAt(44), true},
		{"below zero and worse", marginAt(-3), marginAt(-8), false},
		{"through zero", marginAt(1), marginAt(-2), false},
		{"no figure any more", marginAt(41.2), Finding{Rule: "phase-margin", Pointer: "/targets/phase-margin", Severity: Error}, false},
		{"a figure again", Finding{Rule: "phase-margin", Pointer: "/targets/phase-margin", Severity: Error}, marginAt(41.2), true},
		{"more severe", with(marginAt(41.2), func(f *Finding) { f.Severity = Warning }), marginAt(41.2), false},
		{"less severe", marginAt(41.2), with(marginAt(30), func(f *Finding) { f.Severity = Warning }), true},
		{"moved lines", marginAt(41.2), with(marginAt(41.2), func(f *Finding) { f.Start, f.End = 900, 920 }), true},
		{"another place", marginAt(41.2), with(marginAt(41.2), func(f *Finding) { f.Pointer = "/compensator/feedback-resistor" }), false},
		{"another rule", marginAt(41.2), with(marginAt(41.2), func(f *Finding) { f.Rule = "gain-margin" }), false},
		{"above its limit, and higher", crossing(4900, 2620), crossing(5200, 2620), false},
		{"above its limit, and lower", crossing(4900, 2620), crossing(4000, 2620), true},
		{"a limit that fell with the zero", crossing(4900, 2620), crossing(4900, 2000), false},
		{"of another kind", Finding{Rule: "not-assessed", Severity: Note, About: "input-filter"}, Finding{Rule: "not-assessed", Severity: Note, About: "phase-margin"}, false},
	} {
		t.Run(tt.name, func(t *testing.T) {
			now := []Finding{tt.now}
			recorded(t, tt.was).Match("shelf/a", now)
			assert.Equal(t, tt.accepted, now[0].Recorded)
			assert.Equal(t, !tt.accepted, now[0].Live())
		})
	}
	now := []Finding{marginAt(41.2)}
	assert.Len(t, recorded(t, marginAt(41.2)).Match("shelf/b", now), 0)
	assert.False(t, now[0].Recorded, "of another file")
}

func with(f Finding, change func(*Finding)) Finding { change(&f); return f }

func crossing(hertz, limit float64) Finding {
	return Finding{Rule: "rhp-zero-crossover", Severity: Error, Measured: &Number{hertz, "Hz"}, Limit: &Number{limit, "Hz"}}
}

func TestManySmallStepsDoNotPass(t *testing.T) {
	l := recorded(t, marginAt(41))
	for step := 1; step <= 10; step++ {
		now := []Finding{marginAt(41 - 0.2*float64(step))}
		l.Match("shelf/a", now)
		l.Renew("shelf/a", now, func(string) bool { return true }, false)
		assert.Equal(t, step <= 2, now[0].Recorded, "0.45° is the band, step %d", step)
	}
}

func TestSeveralOfOneKindAreMatchedWorstToWorst(t *testing.T) {
	now := []Finding{marginAt(30), marginAt(44), marginAt(43)}
	recorded(t, marginAt(43), marginAt(30)).Match("shelf/a", now)
	assert.Equal(t, []bool{true, false, true}, []bool{now[0].Recorded, now[1].Recorded, now[2].Recorded}, "one more than on record")
}

func TestRenewingShrinksUnlessToldOtherwise(t *testing.T) {
	everything := func(string) bool { return true }
	l := recorded(t, marginAt(41), crossing(4900, 2620))
	require.Equal(t, 2, l.Len())

	now := []Finding{marginAt(43), {Rule: "duty-range", Severity: Error}}
	assert.Len(t, l.Match("shelf/a", now), 1)
	assert.Equal(t, Renewal{Removed: 1, Tightened: 1}, l.Renew("shelf/a", now, everything, false))
	assert.Equal(t, 1, l.Len(), "what is new is not added")
	again := []Finding{marginAt(41)}
	l.Match("shelf/a", again)
	assert.False(t, again[0].Recorded, "41° was on record, 43° is now")

	worse := []Finding{marginAt(30)}
	l.Match("shelf/a", worse)
	assert.Equal(t, Renewal{}, l.Renew("shelf/a", worse, everything, false), "what is worse is not taken over")
	l.Match("shelf/a", worse)
	assert.Equal(t, Renewal{Loosened: 1}, l.Renew("shelf/a", worse, everything, true))

	assert.Equal(t, Renewal{}, l.Renew("shelf/a", nil, func(string) bool { return false }, false), "a rule that was not judged keeps its entries")
	assert.Equal(t, 1, l.Len())
	assert.Equal(t, Renewal{Removed: 1}, l.Renew("shelf/a", nil, everything, false))
	assert.Zero(t, l.Len())
}

func TestWhatCannotBeAcceptedIsNotPutOnRecord(t *testing.T) {
	waived := marginAt(30)
	waived.Waiver = &Waiver{"measured", "2031-01-01"}
	l := recorded(t, waived, Finding{Rule: "internal", Severity: Error}, Finding{Rule: "waiver-expired", Severity: Error}, Finding{Rule: "spec-shape", Severity: Error})
	assert.Zero(t, l.Len())
	now := []Finding{waived}
	recorded(t, marginAt(30)).Match("shelf/a", now)
	assert.False(t, now[0].Recorded, "the waiver says it already")
}

func TestALedgerIsReadWithItsPlaces(t *testing.T) {
	const head = ledgerHead + "\n"
	for _, tt := range []struct{ text, wrong string }{
		{"", `known.ledger:1:1: this is no ledger`},
		{"# something else\n", `known.ledger:1:1: this is no ledger`},
		{head + "a\tphase-margin\t/targets\n", "known.ledger:2:1: expected 8 fields"},
		{head + "a\tphase-margins\t-\t-\terror\t-\t-\t-\n", `known.ledger:2:3: there is no rule "phase-margins"`},
		{head + "\na\tphase-margin\t-\t-\tfatal\t-\t-\t-\n", `known.ledger:3:20: the severity is error, warning or note, not "fatal"`},
		{head + "a\tphase-margin\t-\t-\terror\tmuch\t-\t-\n", `known.ledger:2:26: "much" is no number`},
		{head + "a\tphase-margin\t-\t-\terror\tNaN\t-\t-\n", `"NaN" is no number`},
		{head + "%zz\tphase-margin\t-\t-\terror\t-\t-\t-\n", "two hexadecimal digits"},
		{head + "-\tphase-margin\t-\t-\terror\t-\t-\t-\n", "the file is missing"},
		{head + "<<<<<<< HEAD\n", "known.ledger:2:1: a merge was left unfinished here"},
	} {
		_, err := ReadLedger("known.ledger", []byte(tt.text))
		if assert.Error(t, err, tt.text) {
			assert.Contains(t, err.Error(), tt.wrong)
		}
	}
	l, err := ReadLedger("known.ledger", []byte("\ufeff"+ledgerHead+"\r\n# a comment\r\na\tphase-margin\t-\t-\terror\t41\t45\tdeg\r\n"))
	require.NoError(t, err)
	assert.Equal(t, 1, l.Len())
}

func TestOddPathsComeBackAsTheyWere(t *testing.T) {
	for _, path := range []string{"a b/c.converter.yaml", "tab\there", "line\nbreak", "100 %", "#first", "-", " blank", "<<<<<<< x", "ärger/µ.converter.yaml", "../out.converter.yaml"} {
		l := NewLedger()
		l.Renew(path, []Finding{marginAt(41)}, func(string) bool { return true }, true)
		again, err := ReadLedger("known.ledger", l.Text())
		require.NoError(t, err, path)
		assert.Equal(t, []string{path}, again.Paths())
		assert.Equal(t, strings.Count(string(l.Text()), "\n"), strings.Count(ledgerLines, "\n")+1, "one line")
	}
}

func FuzzLedger(f *testing.F) {
	l := NewLedger()
	l.Renew("shelf/a b", []Finding{marginAt(41), crossing(4900, 2620), {Rule: "not-assessed", Severity: Note, About: "input-filter"}}, func(string) bool { return true }, true)
	f.Add(l.Text())
	f.Add([]byte(ledgerHead + "\r\n%23a\tphase-margin\t-\t%25\tnote\t1e300\t-0\t°\n"))
	f.Add([]byte(ledgerHead + "\n<<<<<<<\n"))
	f.Add([]byte("\ufeff" + ledgerHead))
	f.Fuzz(func(t *testing.T, text []byte) {
		l, err := ReadLedger("l", text)
		if err != nil {
			return
		}
		once := l.Text()
		again, err := ReadLedger("l", once)
		if err != nil {
			t.Fatalf("what was written is not read again: %v\n%s", err, once)
		}
		if string(again.Text()) != string(once) {
			t.Fatalf("not stable:\n%s\n%s", once, again.Text())
		}
		for _, path := range l.Paths() {
			for _, r := range l.entries[path] {
				if math.IsInf(r.Measured, 0) {
					t.Fatal("no figure is infinite")
				}
			}
		}
	})
}

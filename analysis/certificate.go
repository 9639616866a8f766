package analysis

// Verdict is what a certificate says about one margin.
type Verdict int

const (
	Proved    Verdict = iota + 1 // the margin holds at every point of the box
	Refuted                      // it does not: Certificate.At is a point where it falls short
	Undecided                    // neither within the budget, or outside what the proof covers
)

// String gives the word of the output forms.
func (v Verdict) String() string {
	switch v {
	case Proved:
		return "proved"
	case Refuted:
		return "refuted"
	case Undecided:
		return "undecided"
	}
	return "unknown verdict"
}

// Certificate is the verdict on one margin over the whole box of operating range and tolerances.
type Certificate struct {
	Verdict Verdict
	Limit   float64   // what was asked for
	At      []Setting // refuted: the counterexample; undecided: the middle of the largest box left, or nil
	Value   float64   // the margin at At, NaN: none
	Boxes   int       // boxes looked at
	Left    float64   // share of the box of parameters that is not proved: 0 when proved
	Why     string    // undecided: what stood in the way, a clause without a full stop
}

// Proof holds a certificate for each margin asked for; nil: not asked.
type Proof struct{ PhaseMargin, GainMargin, ModulusMargin *Certificate }

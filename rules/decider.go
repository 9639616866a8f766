package rules

import (
	"context"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/loop"
)

// Moved names the figure of the loop that a rule's findings are about, so that the part which moves it most can be named.
type Moved struct {
	Words  string // "phase margin"
	Unit   string // of the figure; "%": the effect is told per cent of it
	Raises bool   // a larger figure is worse
	Of     func(*loop.Figures) float64
}

var (
	movedPhase     = &Moved{"phase margin", "deg", false, analysis.PhaseMarginOf}
	movedGain      = &Moved{"gain margin", "dB", false, analysis.GainMarginOf}
	movedModulus   = &Moved{"modulus margin", "", false, func(l *loop.Figures) float64 { return l.ModulusMargin }}
	movedCrossover = &Moved{"crossover", "%", true, analysis.CrossoverOf}
)

// nameDeciders adds to the findings that stand for themselves the part which moves their figure most, per cent for per cent, at
// the corner of the finding; a second one that moves it nearly as much too.
func nameDeciders(c *Case, findings []Finding) {
	const nearly = 0.7
	for i := range findings {
		f := &findings[i]
		rule := Find(f.Rule)
		if rule == nil || rule.Moves == nil || f.Corner == nil || f.Cause != nil {
			continue
		}
		effects, err := analysis.Effects(context.Background(), c.Design, f.Corner, rule.Moves.Of, false)
		if err != nil {
			continue
		}
		named, most := 0, 0.0
		for _, e := range effects {
			pointer := c.pointerOfPart(e.Path)
			if pointer == "" {
				continue
			}
			if named == 0 {
				most = math.Abs(e.PerPercent)
			}
			if named == 2 || math.Abs(e.PerPercent) < nearly*most {
				break
			}
			words := rule.Moves.decides(c, f, pointer, e.PerPercent)
			if words == "" {
				break
			}
			place := c.Spec.Place(pointer)
			place.Message = words
			f.Related = append(f.Related, place)
			f.Deciders = append(f.Deciders, words)
			named++
		}
	}
}

// decides words one effect: "rolloff-capacitor decides: 1 % more costs 0.3°". "" where the effect cannot be told.
func (m *Moved) decides(c *Case, f *Finding, pointer string, perPercent float64) string {
	unit := m.Unit
	if unit == "%" {
		corner, err := analysis.At(c.Design, f.Corner)
		if err != nil || corner.Loop == nil {
			return ""
		}
		perPercent /= m.Of(corner.Loop)
	}
	if math.IsNaN(perPercent) || perPercent == 0 {
		return ""
	}
	more := "more"
	if (perPercent > 0) != m.Raises {
		more = "less"
	}
	size := number(math.Abs(perPercent), unit)
	if m.Raises {
		return partName(pointer) + " decides: 1 % " + more + " raises the " + m.Words + " by " + size
	}
	return partName(pointer) + " decides: 1 % " + more + " costs " + size
}

// partName is a compensator's part by its key, any other value by its words.
func partName(pointer string) string {
	if strings.HasPrefix(pointer, "/compensator/") && strings.Count(pointer, "/") == 2 {
		return lastKey(pointer)
	}
	return placeWords(pointer)
}

// pointerOfPart is where a part of the analysis stands in the file, "" where the file does not state it. A single bank may be written
// alone or as the only item of a list.
func (c *Case) pointerOfPart(path string) string {
	for _, p := range [...]string{path, strings.Replace(path, "output-capacitor.", "output-capacitors.0.", 1), strings.Replace(path, "output-capacitors.0.", "output-capacitor.", 1)} {
		if pointer := pointerOf(p); c.Spec.Has(pointer) {
			return pointer
		}
	}
	return ""
}

// PartWords names the part at an analysis path as a finding does, and its place in the file; "" where the file does not state it.
func (c *Case) PartWords(path string) (words, pointer string) {
	pointer = c.pointerOfPart(path)
	if pointer == "" {
		return "", ""
	}
	return partName(pointer), pointer
}

package workspace

import (
	"context"
	"math"
	"slices"
	"sort"
	"strings"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
)

// PartChange is one part, or one setting, that a change touched.
type PartChange struct {
	Name     string   // "feedback-resistor", "output-capacitor"
	Pointers []string // of what belongs together
	Values   []ValueChange
}

// ValueChange is one value before and after, as they are written; "" where there is none.
type ValueChange struct{ Pointer, Old, New string }

// Share is how much of a figure's change one changed part explains.
type Share struct {
	Part   int // index into Comparison.Parts
	Effect float64
}

// mostParts bounds how many changed parts are tried one by one; what is beyond is taken together.
const mostParts = 12

// explain lists the changed parts and finds how much each moves each figure: alone put into the old design, and alone taken back from the new one,
// in the mean, so that parts which work together share what they do together. It is done at quick depth, both ends included.
func (c *Comparison) explain(ctx context.Context, o Options) {
	c.Parts = partChanges(c.Before.Spec, c.After.Spec)
	if len(c.Parts) == 0 {
		return
	}
	old, okOld := quickWorst(ctx, c.Before.Spec, o)
	now, okNow := quickWorst(ctx, c.After.Spec, o)
	if !okOld || !okNow {
		return
	}
	effects := make([][]Share, len(c.Figures))
	for i, part := range c.Parts {
		alone, ok1 := quickWorst(ctx, c.Before.Spec.With(c.After.Spec, part.Pointers...), o)
		back, ok2 := quickWorst(ctx, c.After.Spec.With(c.Before.Spec, part.Pointers...), o)
		for j, f := range c.Figures {
			effect, n := 0.0, 0
			add := func(from, to *analysis.Worsts, ok bool) {
				if !ok {
					return
				}
				if v := rules.FigureOf(f.Figure, to) - rules.FigureOf(f.Figure, from); !math.IsNaN(v) {
					effect, n = effect+v, n+1
				}
			}
			add(old, alone, ok1)
			add(back, now, ok2)
			if n > 0 {
				effects[j] = append(effects[j], Share{i, effect / float64(n)})
			}
		}
	}
	for j := range c.Figures {
		c.Figures[j].Shares = leading(c.Figures[j], effects[j])
	}
}

// leading keeps the parts that explain a figure's change: those that work in its direction, the largest first, until most of it is
// explained, and then the one that works against it most, where that matters.
func leading(f FigureChange, all []Share) []Share {
	if !f.Moved() {
		return nil
	}
	total := f.After.Value - f.Before.Value
	if math.IsNaN(total) {
		return nil
	}
	sort.SliceStable(all, func(i, j int) bool { return math.Abs(all[i].Effect) > math.Abs(all[j].Effect) })
	var with, against []Share
	sum := 0.0
	for _, s := range all {
		switch {
		case s.Effect*total > 0 && math.Abs(sum) < 0.8*math.Abs(total) && len(with) < 3:
			with = append(with, s)
			sum += s.Effect
		case s.Effect*total < 0 && math.Abs(s.Effect) > 0.2*math.Abs(total) && len(against) == 0:
			against = append(against, s)
		}
	}
	return append(with, against...)
}

// quickWorst is the worst figures of a spec at quick depth.
func quickWorst(ctx context.Context, s *schema.Spec, o Options) (w *analysis.Worsts, ok bool) {
	defer func() {
		if recover() != nil { // values of two designs that no model takes together
			w, ok = nil, false
		}
	}()
	r, err := analysis.Analyse(ctx, s.Design(), analysis.Options{Depth: analysis.Quick, Jobs: o.Jobs})
	if err != nil {
		return nil, false
	}
	return &r.Worst, true
}

// partChanges lists what differs between two specs in what the loop is made of, by part.
func partChanges(old, now *schema.Spec) []PartChange {
	var parts []PartChange
	byName := map[string]int{}
	whole := map[string]bool{"/compensator": old.Text("/compensator/network") != now.Text("/compensator/network"), "/modulator": old.Text("/modulator/scheme") != now.Text("/modulator/scheme")}
	all := old.Text("/topology") != now.Text("/topology")
	for _, v := range schema.Differences(old, now) {
		name, pointers := partOf(v.Pointer, whole)
		if name == "" {
			continue
		}
		if all {
			name, pointers = "topology", []string{"/" + strings.Split(v.Pointer, "/")[1]}
		}
		at, known := byName[name]
		if !known {
			at = len(parts)
			if at >= mostParts {
				at, name = mostParts-1, "further parts"
				parts[at].Name = name
			} else {
				parts = append(parts, PartChange{Name: name})
			}
			byName[name] = at
		}
		for _, p := range pointers {
			if !slices.Contains(parts[at].Pointers, p) {
				parts[at].Pointers = append(parts[at].Pointers, p)
			}
		}
		parts[at].Values = append(parts[at].Values, ValueChange{v.Pointer, v.Old, v.New})
	}
	return parts
}

// partOf is the part that a value belongs to and what has to be put in to change it, "" for what the loop does not know.
func partOf(pointer string, whole map[string]bool) (name string, pointers []string) {
	steps := strings.Split(pointer, "/")
	switch owner := steps[1]; owner {
	case "format", "title", "libraries", "targets", "stated", "waivers", "measured-loop", "conduction", "flux-balance":
		return "", nil
	case "output-capacitor", "output-capacitors":
		return "output-capacitor", []string{"/output-capacitor", "/output-capacitors"}
	case "compensator", "modulator", "load":
		if whole["/"+owner] {
			return owner, []string{"/" + owner}
		}
		if len(steps) > 2 {
			name := steps[2]
			switch {
			case name == "designed-for" || name == "title" || name == "format" || name == "use":
				return "", nil
			case owner == "load":
				name = "load " + name
			}
			return name, []string{"/" + owner + "/" + steps[2]}
		}
		return owner, []string{"/" + owner}
	default:
		return owner, []string{"/" + owner}
	}
}

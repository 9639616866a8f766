package rules

import (
	"halfplane/analysis"
	"halfplane/schema"
)

// at starts a finding about the value at a pointer. A value that came through `use` or `part` is reported at that
// reference in the design, with its place in the shared file related.
func (c *Case) at(pointer string) Finding {
	place := c.Spec.Place(pointer)
	f := Finding{Pointer: place.Pointer, Doc: place.Doc, Start: place.Start, End: place.End}
	if shared, ok := c.Spec.Shared(pointer); ok {
		shared.Message = placeWords(pointer) + " comes from here"
		f.Related = append(f.Related, shared)
	}
	return f
}

// relate adds the values that decide a finding, those of them that the file states.
func (c *Case) relate(f *Finding, why string, pointers ...string) {
	for _, pointer := range pointers {
		if !c.Spec.Has(pointer) {
			continue
		}
		place := c.Spec.Place(pointer)
		if place.Doc == f.Doc && place.Start == f.Start && place.End == f.End || holds(f.Related, place) {
			continue
		}
		place.Message = placeWords(pointer) + " " + why
		f.Related = append(f.Related, place)
	}
}

// tell adds something worth knowing that has no place of its own.
func (f *Finding) tell(words string) {
	f.Related = append(f.Related, schema.Related{Doc: f.Doc, Pointer: f.Pointer, Start: f.Start, End: f.End, Message: words})
}

func holds(related []schema.Related, place schema.Related) bool {
	for _, r := range related {
		if r.Doc == place.Doc && r.Start == place.Start && r.End == place.End {
			return true
		}
	}
	return false
}

// here is a Place that is always the same.
func here(pointer string) func(*Case) string {
	return func(*Case) string { return pointer }
}

// firstOf is a Place: the first of the pointers that the file states, else the last one (whose parent then is reported).
func firstOf(pointers ...string) func(*Case) string {
	return func(c *Case) string {
		for _, pointer := range pointers {
			if c.Spec.Has(pointer) {
				return pointer
			}
		}
		return pointers[len(pointers)-1]
	}
}

// gainPart is the part of the compensator that sets its gain at crossover.
func gainPart(c *Case) string {
	switch c.Spec.Text("/compensator/network") {
	case "type-1":
		return "/compensator/integrator-capacitor"
	case "optocoupler":
		return "/compensator/led-resistor"
	case "transfer-function":
		if c.Spec.Has("/compensator/gain") || !c.Spec.Has("/compensator/integrator") {
			return "/compensator/gain"
		}
		return "/compensator/integrator"
	case "digital":
		return "/compensator/numerator"
	}
	return "/compensator/feedback-resistor"
}

// targetOrGainPart is the place of a margin: its entry in targets, else the gain part.
func targetOrGainPart(target string) func(*Case) string {
	return func(c *Case) string {
		if c.Spec.Has(target) {
			return target
		}
		return gainPart(c)
	}
}

// dutyLimit is the place of what the upper duty limit decides.
func dutyLimit(c *Case) string {
	return firstOf("/modulator/duty-limit/max", "/modulator/duty-limit", "/modulator/scheme")(c)
}

// atCorner starts a finding about the value at a pointer that is worst at a corner.
func (c *Case) atCorner(pointer string, corner *analysis.Corner) Finding {
	f := c.at(pointer)
	f.Corner = corner.At
	return f
}

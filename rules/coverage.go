package rules

import (
	"fmt"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/plant"
)

// uncovered words the corners at which a rule lacks what it reads, "" when it lacks nothing. only is true when every such
// corner is one whose output voltage cannot be reached.
func uncovered(c *Case, rule *Rule) (reason string, only bool) {
	var unreached, unmodelled []*analysis.Corner
	for i := range c.Result.Corners {
		corner := &c.Result.Corners[i]
		switch {
		case rule.Reads.knows(corner) || rule.Judges != nil && corner.Reached && !rule.Judges(corner):
		case !corner.Reached:
			unreached = append(unreached, corner)
		default:
			unmodelled = append(unmodelled, corner)
		}
	}
	// duty-range itself reports the corners that are out of reach; to it they are no gap.
	if rule.Name == "duty-range" {
		unreached = nil
	}
	var reasons []string
	if len(unmodelled) > 0 {
		reasons = append(reasons, unmodelledWords(c, unmodelled))
	}
	if len(unreached) > 0 {
		reasons = append(reasons, "no duty reaches the output voltage "+whereWords(c, unreached, nil))
	}
	return strings.Join(reasons, "; "), len(unmodelled) == 0 && len(unreached) > 0
}

func unmodelledWords(c *Case, corners []*analysis.Corner) string {
	topology := c.Design.Nominal.Circuit.Topology.String()
	if corners[0].Plant.Mode == plant.Discontinuous {
		return fmt.Sprintf("no model for discontinuous conduction of a %s, %s", topology, whereWords(c, corners, c.boundary))
	}
	return fmt.Sprintf("no model for a %s %s", topology, whereWords(c, corners, nil))
}

// boundary is the load at which a corner leaves continuous conduction (A), NaN where it never does.
func (c *Case) boundary(corner *analysis.Corner) float64 {
	return plant.CriticalCurrent(c.circuit(corner.At))
}

// whereWords says at which inputs, and below which loads when a limit is known, corners lie: "below 0.272 A at 12.0 V in".
func whereWords(c *Case, corners []*analysis.Corner, limit func(*analysis.Corner) float64) string {
	if len(corners) == len(c.Result.Corners) {
		return "at every corner"
	}
	var words []string
	input := c.axis("input-voltage")
	for _, volts := range distinct(input.Min, input.Nominal, input.Max) {
		var heaviest *analysis.Corner
		for _, corner := range corners {
			if c.valueAt(corner, "input-voltage") == volts && (heaviest == nil || c.valueAt(corner, "load.current") > c.valueAt(heaviest, "load.current")) {
				heaviest = corner
			}
		}
		if heaviest == nil {
			continue
		}
		at := "at " + number(volts, "V") + " in"
		if limit != nil {
			if load := limit(heaviest); !math.IsNaN(load) {
				at = "below " + number(load, "A") + " " + at
			}
		} else if load := c.valueAt(heaviest, "load.current"); !math.IsNaN(load) {
			at += " and " + number(load, "A")
		}
		words = append(words, at)
	}
	if len(words) == 0 {
		return "at " + c.cornerWords(corners[0].At)
	}
	return strings.Join(words, ", ")
}

// distinct drops repeated values, keeping order.
func distinct(values ...float64) []float64 {
	var kept []float64
	for _, v := range values {
		if len(kept) == 0 || kept[len(kept)-1] != v {
			kept = append(kept, v)
		}
	}
	return kept
}

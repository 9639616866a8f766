package rules

import (
	"encoding/binary"
	"math"
	"slices"
	"strings"

	"halfplane/analysis"
	"halfplane/analysis/network"
	"halfplane/analysis/plant"
	"halfplane/analysis/synthesis"
)

// worst finds the corner with the highest score; a corner whose score is NaN is passed over. It returns nil when no corner
// has a score. Of corners that are equal but for rounding the one with the fewest parts off nominal counts, then the first in the
// analysis' order: nominal before operating before refined.
func (c *Case) worst(score func(*analysis.Corner) float64) (*analysis.Corner, float64) {
	r := race{nominal: c.nominal().At}
	for i := range c.Result.Corners {
		r.enter(&c.Result.Corners[i], score(&c.Result.Corners[i]))
	}
	return r.leader, r.score
}

// worstStage is worst for a score that the compensator has no part in: of corners that differ in compensator parts only, the
// first is scored.
func (c *Case) worstStage(score func(*analysis.Corner) float64) (*analysis.Corner, float64) {
	stages := c.stages
	if stages == nil {
		stages = distinctStages(c.Result)
	}
	r := race{nominal: c.nominal().At}
	for _, i := range stages {
		r.enter(&c.Result.Corners[i], score(&c.Result.Corners[i]))
	}
	return r.leader, r.score
}

// race keeps the corner with the highest score so far.
type race struct {
	leader  *analysis.Corner
	score   float64
	nominal []analysis.Setting // nil: the first of equals leads
}

func (r *race) enter(corner *analysis.Corner, score float64) {
	if r.leader == nil && !math.IsNaN(score) || score-r.score > 1e-9*math.Abs(r.score) {
		r.leader, r.score = corner, score
		return
	}
	if r.nominal != nil && math.Abs(score-r.score) <= 1e-9*math.Abs(r.score) && r.deviations(corner) < r.deviations(r.leader) {
		r.leader = corner
	}
}

// deviations counts the tolerances of a corner that are not nominal; of equal corners the plainer is told.
func (r *race) deviations(corner *analysis.Corner) int {
	n := 0
	for i, s := range corner.At {
		if i < len(r.nominal) && s.Value != r.nominal[i].Value && s.Path != "input-voltage" && s.Path != "load.current" {
			n++
		}
	}
	return n
}

// distinctStages lists the corners (by index) whose power stage is not that of an earlier corner.
func distinctStages(result *analysis.Result) []int {
	seen := make(map[string]bool)
	var distinct []int
	var key []byte
	for i := range result.Corners {
		key = key[:0]
		for _, s := range result.Corners[i].At {
			if !onCompensator(s.Path) {
				key = binary.LittleEndian.AppendUint64(key, math.Float64bits(s.Value))
			}
		}
		if !seen[string(key)] {
			seen[string(key)] = true
			distinct = append(distinct, i)
		}
	}
	return distinct
}

// withoutCompensator is a corner with the compensator's parts at their nominal values: what does not look at the loop is the
// same there, and says so in fewer words.
func (c *Case) withoutCompensator(corner []analysis.Setting) []analysis.Setting {
	plain := slices.Clone(corner)
	for i, s := range plain {
		if onCompensator(s.Path) {
			plain[i].Value = c.axis(s.Path).Nominal
		}
	}
	return plain
}

func onCompensator(path string) bool { return strings.HasPrefix(path, "compensator.") }

// nominal is the corner at nominal input, load and parts.
func (c *Case) nominal() *analysis.Corner { return &c.Result.Corners[0] }

// fullLoad is the corner for which figures are stated: nominal input, full load, nominal parts.
func (c *Case) fullLoad() *analysis.Corner {
	full := c.axis("load.current").Max
	for i := range c.Result.Corners[:min(c.Result.Operating+1, len(c.Result.Corners))] {
		corner := &c.Result.Corners[i]
		if c.valueAt(corner, "load.current") == full && c.valueAt(corner, "input-voltage") == c.axis("input-voltage").Nominal {
			return corner
		}
	}
	return c.nominal()
}

// axis is a field's spread; a field without one has its nominal value three times.
func (c *Case) axis(path string) analysis.Axis {
	for _, a := range c.Design.Axes {
		if a.Path == path {
			return a
		}
	}
	point := c.Design.Nominal
	value := math.NaN()
	if field := analysis.Field(&point, path); field != nil {
		value = *field
	}
	return analysis.Axis{Path: path, Min: value, Nominal: value, Max: value}
}

// valueAt is a field's value at a corner, as written in the spec.
func (c *Case) valueAt(corner *analysis.Corner, path string) float64 {
	for _, s := range corner.At {
		if s.Path == path {
			return s.Value
		}
	}
	return c.axis(path).Nominal
}

// pointed remembers the circuit and the network of a corner's settings, for the many rules that look at the same corners. Nothing that is
// remembered is written to.
type pointed struct {
	circuits map[*analysis.Setting]*plant.Circuit
	networks map[*analysis.Setting]*network.Parts
	mends    map[int][]Mend // of the loop, by attempt
	problems map[slack]*synthesis.Problem
}

// circuit is the power stage and modulator at a corner; it is not to be changed.
func (c *Case) circuit(settings []analysis.Setting) *plant.Circuit {
	if len(settings) == 0 || c.pointed == nil {
		return c.circuitAt(settings)
	}
	known := c.pointed.circuits[&settings[0]]
	if known == nil {
		known = c.circuitAt(settings)
		c.pointed.circuits[&settings[0]] = known
	}
	return known
}

func (c *Case) circuitAt(settings []analysis.Setting) *plant.Circuit {
	p := analysis.Point{Circuit: c.Design.Nominal.Circuit}
	p.Circuit.Banks = slices.Clone(p.Circuit.Banks)
	for _, s := range settings {
		if !onCompensator(s.Path) {
			assign(&p, s)
		}
	}
	return &p.Circuit
}

// parts is the compensator at a corner; it is not to be changed.
func (c *Case) parts(settings []analysis.Setting) *network.Parts {
	if len(settings) == 0 || c.pointed == nil {
		return c.partsAt(settings)
	}
	known := c.pointed.networks[&settings[0]]
	if known == nil {
		known = c.partsAt(settings)
		c.pointed.networks[&settings[0]] = known
	}
	return known
}

func (c *Case) partsAt(settings []analysis.Setting) *network.Parts {
	p := analysis.Point{Network: c.Design.Nominal.Network}
	p.Network.Zeros, p.Network.Poles = slices.Clone(p.Network.Zeros), slices.Clone(p.Network.Poles)
	p.Network.Numerator, p.Network.Denominator = slices.Clone(p.Network.Numerator), slices.Clone(p.Network.Denominator)
	for _, s := range settings {
		if onCompensator(s.Path) {
			assign(&p, s)
		}
	}
	return &p.Network
}

func assign(p *analysis.Point, s analysis.Setting) {
	if field := analysis.Field(p, s.Path); field != nil {
		*field = s.Value
	}
}

// sameCorner says whether two assignments are the same.
func sameCorner(a, b []analysis.Setting) bool { return slices.Equal(a, b) }

// continuous says whether a corner has a model and is in continuous conduction.
func continuous(corner *analysis.Corner) bool {
	return corner.Reached && corner.Plant.Mode == plant.Continuous
}

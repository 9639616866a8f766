package workspace

import (
	"fmt"
	"math"
	"strings"

	"halfplane/analysis"
	"halfplane/schema"
)

// Assign reads assignments "path=value,…" of spec fields, with values in SI units or with a unit, and gives the figures of
// exactly that point; fields left out are nominal.
func Assign(spec *schema.Spec, texts []string) (analysis.Corner, error) {
	var settings []analysis.Setting
	for _, text := range texts {
		for _, one := range strings.Split(text, ",") {
			s, err := assignment(one)
			if err != nil {
				return analysis.Corner{}, err
			}
			settings = append(settings, s)
		}
	}
	corner, err := analysis.At(spec.Design(), settings)
	if err != nil {
		return corner, fmt.Errorf("this point has no figures: %w", err)
	}
	return corner, nil
}

// assignment reads one "path=value".
func assignment(text string) (analysis.Setting, error) {
	path, value, ok := strings.Cut(strings.TrimSpace(text), "=")
	path = strings.TrimSpace(path)
	if !ok || path == "" {
		return analysis.Setting{}, fmt.Errorf("%q is no assignment: expected PATH=VALUE, for example input-voltage=9", text)
	}
	info, known := schema.LookupField(schema.Design, "/"+strings.ReplaceAll(path, ".", "/"))
	if !known {
		return analysis.Setting{}, fmt.Errorf("there is no field %q in a design", path)
	}
	q, err := schema.ParseQuantity(value, info.Dimension)
	if err != nil {
		return analysis.Setting{}, fmt.Errorf("%s %w", path, err)
	}
	if q.Spread {
		return analysis.Setting{}, fmt.Errorf("%s expects one value, found %q", path, strings.TrimSpace(value))
	}
	if path == "output-voltage" {
		q.Nominal = math.Abs(q.Nominal) // an inverting topology may write it negative
	}
	return analysis.Setting{Path: path, Value: q.Nominal}, nil
}

package rules

import (
	"github.com/bmatcuk/doublestar/v4"

	"halfplane/schema"
)

// PolicySettings are the severities and thresholds that a policy sets for the file at path, which is relative to the policy's folder, with
// '/' between its parts: those for all files, then those of every entry of paths whose pattern matches, later entries over
// earlier ones. The policy fits its schema; what does not is passed over.
func PolicySettings(policy *schema.Document, path string) Settings {
	s := Settings{Severities: map[string]Severity{}, Thresholds: map[string]float64{}}
	if policy.Root == nil {
		return s
	}
	s.take(policy.Root)
	if entries := policy.Root.Get("paths"); entries != nil {
		for _, entry := range resolved(entries).Items {
			entry = resolved(entry)
			if match := entry.Get("match"); match != nil && matches(resolved(match).Value, path) {
				s.take(entry)
			}
		}
	}
	return s
}

// matches says whether a pattern of paths covers a path; ** stands for any folders.
func matches(pattern, path string) bool {
	ok, err := doublestar.Match(pattern, path)
	return err == nil && ok
}

// take sets what one part of a policy says.
func (s *Settings) take(part *schema.Node) {
	if levels := part.Get("severity"); levels != nil {
		for _, e := range resolved(levels).Entries {
			if level, ok := ParseSeverity(resolved(e.Value).Value); ok {
				s.Severities[e.Key] = level
			}
		}
	}
	limits := part.Get("thresholds")
	if limits == nil {
		return
	}
	for _, e := range resolved(limits).Entries {
		info, known := schema.LookupField(schema.Policy, "/thresholds/"+e.Key)
		if !known {
			continue
		}
		value := resolved(e.Value)
		if value.Kind == schema.Scalar {
			s.limit(e.Key, value, info.Dimension)
			continue
		}
		for _, end := range [...]string{"min", "max"} {
			if v := value.Get(end); v != nil {
				s.limit(e.Key+"."+end, resolved(v), info.Dimension)
			}
		}
	}
}

func (s *Settings) limit(key string, value *schema.Node, dim schema.Dimension) {
	if q, err := schema.ParseQuantity(value.Value, dim); err == nil {
		s.Thresholds[key] = q.Nominal
	}
}

// resolved follows an alias.
func resolved(n *schema.Node) *schema.Node {
	if n.Alias != nil {
		return n.Alias
	}
	return n
}

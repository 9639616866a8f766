package schema

import "strings"

// policyName is the one file name of a policy.
const policyName = "halfplane.yaml"

// KindOf tells the kind of a spec file by its name, which may be a path or a URI. ok is false for a file of no known
// kind, also for one whose name has nothing before the kind (".parts.yaml").
func KindOf(name string) (kind Kind, ok bool) {
	base := name[strings.LastIndexAny(name, `/\`)+1:]
	if base == policyName {
		return Policy, true
	}
	stem, found := cutExtension(base)
	if !found {
		return 0, false
	}
	for _, k := range []Kind{Design, Compensator, Parts} {
		if rest, is := strings.CutSuffix(stem, "."+k.infix()); is && rest != "" {
			return k, true
		}
	}
	return 0, false
}

// cutExtension takes off the extension of one of the two syntaxes.
func cutExtension(base string) (stem string, ok bool) {
	for _, extension := range []string{".yaml", ".yml", ".json"} {
		if stem, ok = strings.CutSuffix(base, extension); ok {
			return stem, true
		}
	}
	return base, false
}

// infix is the word before the extension in the name of a file of that kind.
func (k Kind) infix() string {
	if k == Design {
		return "converter"
	}
	return k.String()
}

// String is the kind as the commands name it.
func (k Kind) String() string {
	switch k {
	case Design:
		return "design"
	case Compensator:
		return "compensator"
	case Parts:
		return "parts"
	case Policy:
		return "policy"
	}
	return "unknown kind"
}

// String is the shape in a designer's words.
func (k NodeKind) String() string {
	switch k {
	case Mapping:
		return "mapping"
	case Sequence:
		return "list"
	case Scalar:
		return "value"
	}
	return "unknown shape"
}

// String is the type in a designer's words.
func (t ScalarType) String() string {
	switch t {
	case Text:
		return "text"
	case Number:
		return "number"
	case Bool:
		return "yes/no"
	case Null:
		return "nothing"
	}
	return "unknown type"
}

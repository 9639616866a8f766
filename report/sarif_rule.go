package report

import (
	"regexp"
	"strings"

	"halfplane/rules"
)

// sarifRuleOf is a rule's descriptor, from its declaration. Braces in its texts stay as they are: a page has no arguments to be put in.
func sarifRuleOf(r *rules.Rule) sarifRule {
	var page strings.Builder
	_ = RulePage(&page, r) // a builder takes everything
	out := sarifRule{
		ID: r.Name, Short: sarifText{r.Sentence}, Full: sarifText{r.Sentence + " Holds when: " + r.Formula + ". Source: " + r.Source + "."},
		Help: sarifHelp{page.String(), rules.Page(r)}, Default: sarifConfiguration{r.Severity.String()},
		Bag: sarifRuleBag{Tags: []string{r.Group.String()}, Group: r.Group.String(), Severities: []string{r.Severity.String()}},
	}
	for _, further := range r.Also {
		out.Bag.Severities = append(out.Bag.Severities, further.String())
	}
	for _, p := range r.Defaults() {
		out.Bag.Policy = append(out.Bag.Policy, member{p.Key, p.Value})
	}
	return out
}

// semantic says whether a version is one by the rules of semantic versioning 2.0.0.
func semantic(version string) bool {
	return regexp.MustCompile(`^(0|[1-9]\d*)\.(0|[1-9]\d*)\.(0|[1-9]\d*)(-[0-9A-Za-z-]+(\.[0-9A-Za-z-]+)*)?(\+[0-9A-Za-z-]+(\.[0-9A-Za-z-]+)*)?$`).MatchString(version)
}

package report

import (
	"slices"
	"strings"

	"halfplane/rules"
	"halfplane/workspace"
)

// The roles of files in a run (3.24.6).
const (
	analysisTarget = "analysisTarget"
	configuration  = "userSpecifiedConfiguration"
)

// sarifArtifacts is the list of files, each once.
type sarifArtifacts struct {
	list []sarifArtifact
	at   map[sarifAddress]int
}

// add lists a file, or finds it on the list; a role that is not empty is added to those that it has.
func (a *sarifArtifacts) add(at sarifAddress, role string) *sarifArtifact {
	i, known := a.at[at]
	if !known {
		i = len(a.list)
		a.at[at] = i
		a.list = append(a.list, sarifArtifact{Location: at, Language: language(at.URI)})
	}
	if out := &a.list[i]; role != "" && !slices.Contains(out.Roles, role) {
		out.Roles = append(out.Roles, role)
	}
	return &a.list[i]
}

// language is that of a spec file, by its name.
func language(uri string) string {
	switch {
	case strings.HasSuffix(uri, ".json"):
		return "json"
	case strings.HasSuffix(uri, ".yaml"), strings.HasSuffix(uri, ".yml"):
		return "yaml"
	}
	return ""
}

// checked lists a file that was checked, and the policy that it was checked with.
func (s *SARIF) checked(f workspace.File) {
	at := s.artifacts.add(s.addresses.of(f.Root, f.Path), analysisTarget)
	if sum := hashOf(f); sum != "" {
		at.Hashes = map[string]string{"sha-256": sum}
	}
	if f.Policy != "" {
		s.artifacts.add(s.addresses.of(f.Root, f.Policy), configuration)
	}
}

// tellOf says what kept a file from being analysed as it should be.
func (s *SARIF) tellOf(f workspace.File) {
	for i, found := range f.Findings {
		switch {
		case found.Rule == "internal":
			s.tell(f, found, rules.Error, found.Message)
		case f.Status == workspace.Unreadable && !f.Defect && i == 0:
			s.tell(f, found, rules.Error, "not analysed: "+found.Message)
		}
	}
	if f.Result != nil && !f.Result.Complete {
		s.tell(f, rules.Finding{}, rules.Note, "not complete: not every extreme of every tolerance was visited")
	}
}

// tell adds a notification about a file; found is the finding behind it, without a rule there is none.
func (s *SARIF) tell(f workspace.File, found rules.Finding, level rules.Severity, words string) {
	n := sarifNotification{Level: level.String(), Message: sarifText{sentence(words)}}
	at := sarifLocation{Physical: sarifPhysical{Address: s.addresses.of(f.Root, f.Path)}}
	if i, known := s.index[found.Rule]; known {
		n.Rule = &sarifRuleReference{found.Rule, i}
		at = s.location(f, found.Doc, found.Start, found.End)
	}
	n.Locations = []sarifLocation{at}
	s.told = append(s.told, n)
}

// Failed says what else has failed than a file: that folders could not be searched. Nil: nothing has.
func (s *SARIF) Failed(err error) {
	if err == nil {
		return
	}
	for _, line := range strings.Split(err.Error(), "\n") {
		s.told = append(s.told, sarifNotification{Level: rules.Error.String(), Message: sarifText{sentence(line)}})
	}
}

// invocation is how the run went: with an error in it, results are missing.
func (s *SARIF) invocation() sarifInvocation {
	failed := func(n sarifNotification) bool { return n.Level == rules.Error.String() }
	return sarifInvocation{!slices.ContainsFunc(s.told, failed), s.told}
}

package report

import "halfplane/rules"

// The parts of SARIF 2.1.0 that are written, by the names of the standard; the numbers are its sections.

type sarifText struct { // 3.11, 3.12
	Text string `json:"text"`
}

type sarifHelp struct { // 3.12
	Text     string `json:"text"`
	Markdown string `json:"markdown"`
}

type sarifRule struct { // 3.49
	ID      string             `json:"id"`
	Short   sarifText          `json:"shortDescription"`
	Full    sarifText          `json:"fullDescription"`
	Help    sarifHelp          `json:"help"`
	Default sarifConfiguration `json:"defaultConfiguration"`
	Bag     sarifTags          `json:"properties"`
}

type sarifConfiguration struct { // 3.50
	Level string `json:"level"`
}

type sarifTags struct { // 3.8
	Tags []string `json:"tags"`
}

// sarifRuleOf is a rule's descriptor, from its declaration.
func sarifRuleOf(r *rules.Rule) sarifRule {
	page := rules.Page(r)
	return sarifRule{
		ID: r.Name, Short: sarifText{r.Sentence}, Full: sarifText{r.Sentence + " Holds when: " + r.Formula + ". Source: " + r.Source + "."},
		Help: sarifHelp{page, page}, Default: sarifConfiguration{r.Severity.String()}, Bag: sarifTags{[]string{r.Group.String()}},
	}
}

type sarifResult struct { // 3.27
	RuleID       string             `json:"ruleId"`
	RuleIndex    int                `json:"ruleIndex"`
	Level        string             `json:"level"`
	Message      sarifText          `json:"message"`
	Locations    []sarifLocation    `json:"locations"`
	Related      []sarifLocation    `json:"relatedLocations,omitempty"`
	Fingerprints map[string]string  `json:"partialFingerprints"`
	Suppressions []sarifSuppression `json:"suppressions"`
	Fixes        []sarifFix         `json:"fixes,omitempty"`
	Properties   sarifProperties    `json:"properties"`
}

// sarifProperties is the property bag (3.8) of a result: the finding's numbers, as in the JSON form.
type sarifProperties struct {
	Corner   settings   `json:"corner,omitempty"`
	Measured *numberOut `json:"measured,omitempty"`
	Limit    *numberOut `json:"limit,omitempty"`
	Nominal  *numberOut `json:"nominal,omitempty"`
	Formula  string     `json:"formula,omitempty"`
	Cause    *causeOut  `json:"cause,omitempty"`
}

type sarifLocation struct { // 3.28
	ID       int            `json:"id,omitempty"`
	Physical sarifPhysical  `json:"physicalLocation"`
	Logical  []sarifLogical `json:"logicalLocations,omitempty"`
	Message  *sarifText     `json:"message,omitempty"`
}

type sarifPhysical struct { // 3.29
	Address sarifAddress `json:"artifactLocation"`
	Region  sarifRegion  `json:"region"`
}

type sarifAddress struct { // 3.4
	URI  string `json:"uri"`
	Base string `json:"uriBaseId"`
}

type sarifRegion struct { // 3.30
	StartLine   int `json:"startLine"`
	StartColumn int `json:"startColumn"`
	EndLine     int `json:"endLine"`
	EndColumn   int `json:"endColumn"`
}

type sarifLogical struct { // 3.33
	FullyQualifiedName string `json:"fullyQualifiedName"`
}

type sarifSuppression struct { // 3.35
	Kind          string `json:"kind"`
	Status        string `json:"status"`
	Justification string `json:"justification"`
}

type sarifFix struct { // 3.55
	Description sarifText     `json:"description"`
	Changes     []sarifChange `json:"artifactChanges"`
}

type sarifChange struct { // 3.56
	Location     sarifAddress       `json:"artifactLocation"`
	Replacements []sarifReplacement `json:"replacements"`
}

type sarifReplacement struct { // 3.57
	Deleted  sarifRegion `json:"deletedRegion"`
	Inserted sarifText   `json:"insertedContent"`
}

type sarifArtifact struct { // 3.24
	Location sarifAddress      `json:"location"`
	Roles    []string          `json:"roles,omitempty"`
	Hashes   map[string]string `json:"hashes,omitempty"`
}

type sarifInvocation struct { // 3.20
	Successful    bool                `json:"executionSuccessful"`
	Notifications []sarifNotification `json:"toolExecutionNotifications,omitempty"`
}

type sarifNotification struct { // 3.58
	Level     string          `json:"level"`
	Message   sarifText       `json:"message"`
	Locations []sarifLocation `json:"locations"`
}

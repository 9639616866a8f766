package report

// The parts of SARIF 2.1.0 that are written, by the names of the standard; the numbers are its sections.

type sarifText struct { // 3.11, 3.12
	Text string `json:"text"`
}

type sarifHelp struct { // 3.12
	Text     string `json:"text"`
	Markdown string `json:"markdown"`
}

type sarifTool struct { // 3.18
	Driver sarifDriver `json:"driver"`
}

type sarifDriver struct { // 3.19
	Name     string      `json:"name"`
	Version  string      `json:"version"`
	Semantic string      `json:"semanticVersion,omitempty"`
	Rules    []sarifRule `json:"rules"`
}

type sarifRule struct { // 3.49
	ID      string             `json:"id"`
	Short   sarifText          `json:"shortDescription"`
	Full    sarifText          `json:"fullDescription"`
	Help    sarifHelp          `json:"help"`
	Default sarifConfiguration `json:"defaultConfiguration"`
	Bag     sarifRuleBag       `json:"properties"`
}

type sarifConfiguration struct { // 3.50
	Level string `json:"level"`
}

// sarifRuleBag is the property bag (3.8) of a rule.
type sarifRuleBag struct {
	Tags       []string `json:"tags"`
	Group      string   `json:"group"`
	Severities []string `json:"severities"`       // all that its findings can have, the default first
	Policy     object   `json:"policy,omitempty"` // its keys with their defaults, as a policy file has them
}

type sarifResult struct { // 3.27
	RuleID       string             `json:"ruleId"`
	RuleIndex    int                `json:"ruleIndex"`
	Kind         string             `json:"kind"`
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
	About    string     `json:"about,omitempty"`
	Cause    *causeOut  `json:"cause,omitempty"`
	Record   *recordOut `json:"record,omitempty"`
}

type sarifLocation struct { // 3.28
	ID       int            `json:"id,omitempty"`
	Physical sarifPhysical  `json:"physicalLocation"`
	Logical  []sarifLogical `json:"logicalLocations,omitempty"`
	Message  *sarifText     `json:"message,omitempty"`
}

type sarifPhysical struct { // 3.29
	Address sarifAddress `json:"artifactLocation"`
	Region  *sarifRegion `json:"region,omitempty"`
}

type sarifAddress struct { // 3.4
	URI  string `json:"uri"`
	Base string `json:"uriBaseId"`
}

// sarifBase is a folder that addresses are relative to.
type sarifBase struct { // 3.4
	Description sarifText `json:"description"`
}

type sarifRegion struct { // 3.30
	StartLine   int `json:"startLine"`
	StartColumn int `json:"startColumn"`
	EndLine     int `json:"endLine"`
	EndColumn   int `json:"endColumn"`
}

type sarifLogical struct { // 3.33
	Name               string `json:"name,omitempty"`
	FullyQualifiedName string `json:"fullyQualifiedName"`
	Kind               string `json:"kind,omitempty"`
}

type sarifSuppression struct { // 3.35
	Kind          string `json:"kind"`
	Status        string `json:"status"`
	Justification string `json:"justification"`
}

type sarifFix struct { // 3.55
	Description sarifText     `json:"description"`
	Changes     []sarifChange `json:"artifactChanges"`
	Properties  *sarifFixBag  `json:"properties,omitempty"`
}

// sarifFixBag is the property bag (3.8) of a repair: the figures of the mended design.
type sarifFixBag struct {
	After settings `json:"after"`
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
	Language string            `json:"sourceLanguage,omitempty"`
	Hashes   map[string]string `json:"hashes,omitempty"`
}

type sarifInvocation struct { // 3.20
	Successful    bool                `json:"executionSuccessful"`
	Notifications []sarifNotification `json:"toolExecutionNotifications,omitempty"`
}

type sarifNotification struct { // 3.58
	Level     string              `json:"level"`
	Message   sarifText           `json:"message"`
	Locations []sarifLocation     `json:"locations,omitempty"`
	Rule      *sarifRuleReference `json:"associatedRule,omitempty"`
}

type sarifRuleReference struct { // 3.52
	ID    string `json:"id"`
	Index int    `json:"index"`
}

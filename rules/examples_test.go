package rules

import (
	"strings"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/schema"
)

// wrongOnPurpose are the rules whose example is no fragment of a valid file.
var wrongOnPurpose = map[string]bool{"spec-syntax": true, "spec-shape": true, "quantity": true}

func TestEveryExampleIsAFragmentOfADesign(t *testing.T) {
	for _, rule := range All() {
		if wrongOnPurpose[rule.Name] {
			continue
		}
		t.Run(rule.Name, func(t *testing.T) {
			doc := schema.Read("fragment.converter.yaml", []byte(rule.Example+"\n"), 0)
			require.NotNil(t, doc.Root)
			require.NotEmpty(t, doc.Root.Entries)
			for _, entry := range doc.Root.Entries {
				knownFields(t, "/"+entry.Key, entry.Value)
			}
			_, problems := schema.Validate(doc, nil)
			for _, p := range problems {
				assert.True(t, strings.Contains(p.Message, "missing") || strings.Contains(p.Message, "needs"), "only what a fragment leaves out is missing: %s", p.Message)
			}
		})
	}
}

func knownFields(t *testing.T, pointer string, n *schema.Node) {
	_, ok := schema.LookupField(schema.Design, pointer)
	assert.True(t, ok, "%s is a field of a design", pointer)
	for _, entry := range n.Entries {
		if entry.Key != "min" && entry.Key != "nominal" && entry.Key != "max" {
			knownFields(t, pointer+"/"+entry.Key, entry.Value)
		}
	}
}

func TestDefaultsAreWrittenAsAPolicyReadsThem(t *testing.T) {
	text := "format: 1\nthresholds:\n"
	seen := map[string]bool{}
	for _, rule := range All() {
		for _, p := range rule.Defaults() {
			if !seen[p.Key] {
				text += "  " + p.Key + ": " + p.Value + "\n"
				seen[p.Key] = true
			}
		}
	}
	_, problems := schema.Validate(schema.Read("halfplane.yaml", []byte(text), 0), nil)
	assert.Empty(t, problems, text)
	assert.Contains(t, text, "rhp-zero-fraction: 1/5\n")
	assert.Contains(t, text, "phase-margin: 45°\n")
	assert.Contains(t, text, "gain-margin: 8 dB\n")
	assert.Contains(t, text, "setpoint-tolerance: 2 %\n")
	assert.Contains(t, text, "assumed-gain-bandwidth: 1 MHz\n")
	assert.Contains(t, text, "half-frequency-quality: {min: 0.15, max: 2}\n")
}

package main

import (
	"context"
	"path"
	"testing"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// TestShelfHoldsExactlyItsExhibits: no file without a line in the list and no line without a file.
func TestShelfHoldsExactlyItsExhibits(t *testing.T) {
	entries, err := shelf.ReadDir("shelf")
	require.NoError(t, err)
	var files, listed []string
	for _, e := range entries {
		files = append(files, e.Name())
	}
	for _, e := range exhibits() {
		listed = append(listed, e.file)
		assert.NotEmpty(t, e.story, e.file)
	}
	assert.Equal(t, files, listed, "sorted, complete")
}

// TestShelfIsAsPlanted: a healthy design has no error and no warning, a planted one exactly its planted finding, at any
// depth of analysis.
func TestShelfIsAsPlanted(t *testing.T) {
	for _, e := range exhibits() {
		for _, depth := range []analysis.Depth{analysis.Quick, analysis.Full} {
			t.Run(e.file, func(t *testing.T) {
				name := path.Join("shelf", e.file)
				text, err := shelf.ReadFile(name)
				require.NoError(t, err)
				f := workspace.Open("shelf").CheckDocument(context.Background(), schema.Read(name, text, 0), workspace.Options{Depth: depth})
				var got []string
				for _, found := range f.Findings {
					if found.Severity >= rules.Warning && found.Cause == nil {
						got = append(got, found.Rule+": "+found.Message)
					}
				}
				if e.rule == "" {
					assert.Empty(t, got)
					return
				}
				require.Len(t, got, 1)
				assert.Contains(t, got[0], e.rule+": ")
			})
		}
	}
}

package lsp

import (
	"context"
	"os"
	"path/filepath"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// sharedDigests is a checker whose finding carries a digest of the compensator file that the design uses.
func sharedDigests(_ context.Context, w *workspace.Workspace, doc *schema.Document, _ workspace.Options) workspace.File {
	f := rules.Finding{Rule: "digest", Severity: rules.Warning, Message: "none", Doc: doc}
	if use := doc.Find("/compensator/use"); use != nil {
		f.Start, f.End = use.Start, use.End
		if shared, err := w.Resolve(doc, use.Value); err != nil {
			f.Message = err.Error()
		} else {
			f.Message = digest(string(shared.Text))
			f.Related = []schema.Related{{Doc: shared, Start: len(shared.Text), End: len(shared.Text), Message: "shared value"}}
		}
	}
	return workspace.File{Document: doc, Findings: []rules.Finding{f}}
}

// station is a folder with a shared compensator, a design that uses it and one that does not.
func station(t *testing.T) (folder, user, other, shared string) {
	folder = t.TempDir()
	write := func(name, text string) string {
		path := filepath.Join(folder, filepath.FromSlash(name))
		require.NoError(t, os.MkdirAll(filepath.Dir(path), 0o755))
		require.NoError(t, os.WriteFile(path, []byte(text), 0o644))
		return path
	}
	write("halfplane.yaml", "format: 1\n")
	user = fileAddress(write("boats/pump.converter.yaml", userText))
	other = fileAddress(write("boats/lamp.converter.yaml", "format: 1\n"))
	shared = fileAddress(write("common/slow loop.compensator.yaml", "on disk"))
	return folder, user, other, shared
}

const userText = "format: 1\ncompensator: {use: \"../common/slow loop.compensator.yaml\"}\n"

func says(message string) func([]diagnostic) bool {
	return func(d []diagnostic) bool { return len(d) == 1 && d[0].Message == message }
}

func TestChangeOfASharedFileRenewsTheDesignsThatUseIt(t *testing.T) {
	_, user, other, shared := station(t)
	k := connect(t, Options{}, sharedDigests)
	k.begin(nil)
	k.open(user, userText, 3)
	k.open(other, "format: 1\n", 1)
	k.published(user, 3, says(digest("on disk")))
	k.published(other, 1, nil)

	k.open(shared, "µ typed", 1)
	p := k.published(user, 3, says(digest("µ typed")))
	require.Len(t, p.Diagnostics[0].Related, 1)
	assert.Equal(t, shared, p.Diagnostics[0].Related[0].Location.URI, "the client's own address")
	assert.Equal(t, area{spot{0, 7}, spot{0, 7}}, p.Diagnostics[0].Related[0].Location.Range)

	k.change(shared, 2, whole("typed on"))
	k.published(user, 3, says(digest("typed on")))
	k.close(shared)
	k.must("the text on disk again", func() bool {
		last := k.pushes[len(k.pushes)-1]
		return last.URI == user && says(digest("on disk"))(last.Diagnostics)
	})
	assert.Len(t, k.pushed(other), 1, "a design that does not use it is left alone")
	versionsRise(t, k.pushed(user))
	k.leave()
}

func TestChangeOnDiskRenewsWhenTheClientTells(t *testing.T) {
	folder, user, _, shared := station(t)
	k := connect(t, Options{}, sharedDigests)
	k.begin(nil)
	k.open(user, userText, 3)
	k.published(user, 3, says(digest("on disk")))
	path := filepath.Join(folder, "common", "slow loop.compensator.yaml")
	require.NoError(t, os.WriteFile(path, []byte("on disk, later"), 0o644))
	k.notify("workspace/didChangeWatchedFiles", object{"changes": []object{{"uri": shared, "type": 2}}})
	k.published(user, 3, says(digest("on disk, later")))
	k.leave()
}

// TestFilesThatUseEachOtherDoNotSpin: two shared files that refer to each other are a mistake in the files, not a fire.
func TestFilesThatUseEachOtherDoNotSpin(t *testing.T) {
	folder := t.TempDir()
	a, b := fileAddress(filepath.Join(folder, "a.compensator.yaml")), fileAddress(filepath.Join(folder, "b.compensator.yaml"))
	k := connect(t, Options{}, sharedDigests)
	k.begin(object{"pause": 60000})
	k.open(a, "use: b.compensator.yaml\n", 1)
	k.open(b, "use: a.compensator.yaml\n", 1)
	k.published(b, 1, nil)
	k.change(a, 2, whole("use: b.compensator.yaml # again\n"))
	k.published(a, 2, nil)
	time.Sleep(100 * time.Millisecond)
	assert.Less(t, len(k.pushed(a))+len(k.pushed(b)), 10)
	k.leave()
}

func TestWatchersAreRegisteredWithAClientThatHasThem(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.call("initialize", object{"capabilities": object{"workspace": object{"didChangeWatchedFiles": object{"dynamicRegistration": true}}}})
	k.notify("initialized", object{})
	k.must("the registration", func() bool { return len(k.requests) == 1 })
	assert.Equal(t, "client/registerCapability", k.requests[0].Method)
	assert.Contains(t, string(k.requests[0].Params), "compensator")
	k.leave()
}

func TestWorkspaceOfAFile(t *testing.T) {
	folder := t.TempDir()
	inner := filepath.Join(folder, "boats", "north")
	require.NoError(t, os.MkdirAll(inner, 0o755))
	file := filepath.Join(inner, "x.converter.yaml")
	s := &server{spaces: map[string]*workspace.Workspace{}}
	if workspace.RootOf(file) != inner {
		t.Skip("the folder for temporary files lies in a marked workspace")
	}
	assert.Equal(t, inner, s.spaceOf(file, true).Root(), "without anything: its folder")
	s.folders = []string{filepath.Join(folder, "elsewhere"), folder}
	assert.Equal(t, folder, s.spaceOf(file, true).Root(), "the client's folder around it")
	assert.Same(t, s.spaceOf(file, true), s.spaceOf(filepath.Join(inner, "y.converter.yaml"), true))
	require.NoError(t, os.WriteFile(filepath.Join(inner, "halfplane.yaml"), nil, 0o644))
	assert.Equal(t, inner, s.spaceOf(file, true).Root(), "a marked folder wins over the client's")
	s.o.Root = folder
	assert.Equal(t, folder, s.spaceOf(file, true).Root(), "an option wins over all")
}

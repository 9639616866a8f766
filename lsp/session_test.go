package lsp

import (
	"encoding/json"
	"fmt"
	"time"

	"github.com/stretchr/testify/require"
)

type object = map[string]any

// capabilities of an editor that can do all that the server makes use of.
func capabilities(encodings ...string) object {
	return object{
		"general": object{"positionEncodings": encodings},
		"textDocument": object{
			"publishDiagnostics": object{"relatedInformation": true, "versionSupport": true, "codeDescriptionSupport": true,
				"tagSupport": object{"valueSet": []int{1, 2}}},
			"hover": object{"contentFormat": []string{"markdown", "plaintext"}},
		},
	}
}

// begin does the handshake and gives the server's capabilities.
func (k *client) begin(options any, encodings ...string) json.RawMessage {
	k.t.Helper()
	r := k.call("initialize", object{"processId": nil, "rootUri": nil, "capabilities": capabilities(encodings...),
		"initializationOptions": options})
	require.Nil(k.t, r.Error)
	k.notify("initialized", object{})
	return r.Result
}

func (k *client) open(uri, text string, version int) {
	k.notify("textDocument/didOpen", object{"textDocument": object{"uri": uri, "languageId": "yaml", "version": version, "text": text}})
}

func (k *client) change(uri string, version int, changes ...object) {
	k.notify("textDocument/didChange", object{"textDocument": object{"uri": uri, "version": version}, "contentChanges": changes})
}

func whole(text string) object { return object{"text": text} }

func part(a area, text string) object { return object{"range": a, "text": text} }

func (k *client) close(uri string) {
	k.notify("textDocument/didClose", object{"textDocument": object{"uri": uri}})
}

// published waits for diagnostics of a version that meet a condition (nil: any) and gives them.
func (k *client) published(uri string, version int, met func([]diagnostic) bool) (p push) {
	k.t.Helper()
	k.must(fmt.Sprintf("diagnostics of %s version %d", uri, version), func() bool {
		for _, p = range k.pushes {
			if p.URI == uri && p.Version != nil && int(*p.Version) == version && (met == nil || met(p.Diagnostics)) {
				return true
			}
		}
		return false
	})
	return p
}

// pushed gives a copy of what was published for a document so far.
func (k *client) pushed(uri string) []push {
	k.mu.Lock()
	defer k.mu.Unlock()
	var out []push
	for _, p := range k.pushes {
		if p.URI == uri {
			out = append(out, p)
		}
	}
	return out
}

// cleared waits for an empty publish without a version.
func (k *client) cleared(uri string) {
	k.t.Helper()
	k.must("the clearing of "+uri, func() bool {
		for _, p := range k.pushes {
			if p.URI == uri && p.Version == nil && len(p.Diagnostics) == 0 {
				return true
			}
		}
		return false
	})
}

// hoverAt asks for a hover and gives its text, "" for none.
func (k *client) hoverAt(uri string, at spot) (string, area) {
	k.t.Helper()
	r := k.call("textDocument/hover", object{"textDocument": object{"uri": uri}, "position": at})
	require.Nil(k.t, r.Error)
	var h struct {
		Contents struct{ Kind, Value string }
		Range    area
	}
	require.NoError(k.t, json.Unmarshal(r.Result, &h))
	return h.Contents.Value, h.Range
}

// exitCode waits for the server's end.
func (k *client) exitCode() int {
	k.t.Helper()
	select {
	case code := <-k.code:
		k.code <- code
		return code
	case <-time.After(wait):
		k.t.Fatalf("the server did not end; its log:\n%s", k.log)
		return -1
	}
}

// leave ends the session as a client should, and checks that nothing but the protocol came.
func (k *client) leave() {
	k.t.Helper()
	require.Nil(k.t, k.call("shutdown", nil).Error)
	k.send(`{"jsonrpc":"2.0","method":"exit"}`)
	require.Equal(k.t, 0, k.exitCode())
	k.must("the end of the output", func() bool { return k.over })
	require.Empty(k.t, k.notLSP)
}

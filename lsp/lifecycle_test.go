package lsp

import (
	"encoding/json"
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"
)

func TestHandshakeTellsWhatIsServed(t *testing.T) {
	k := connect(t, Options{Version: "1.2.3"}, digests)
	var got struct {
		Capabilities struct {
			PositionEncoding string
			TextDocumentSync struct {
				OpenClose bool
				Change    int
			}
			HoverProvider      bool
			DiagnosticProvider any
		}
		ServerInfo struct{ Name, Version string }
	}
	require.NoError(t, json.Unmarshal(k.begin(nil), &got))
	assert.Equal(t, "utf-16", got.Capabilities.PositionEncoding)
	assert.True(t, got.Capabilities.TextDocumentSync.OpenClose)
	assert.Equal(t, 2, got.Capabilities.TextDocumentSync.Change)
	assert.True(t, got.Capabilities.HoverProvider)
	assert.Nil(t, got.Capabilities.DiagnosticProvider, "findings are pushed")
	assert.Equal(t, "halfplane", got.ServerInfo.Name)
	assert.Equal(t, "1.2.3", got.ServerInfo.Version)
	k.leave()
}

func TestPositionEncodingIsTheClientsFirstThatIsKnown(t *testing.T) {
	for want, offered := range map[string][]string{
		"utf-16": {}, "utf-8": {"utf-8", "utf-16"}, "utf-32": {"utf-7", "utf-32", "utf-8"},
	} {
		k := connect(t, Options{}, digests)
		assert.Equal(t, want, string(reads[string](k.begin(nil, offered...), "capabilities", "positionEncoding")))
		k.leave()
	}
}

// TestOddInitializeIsServed: members of the wrong type anywhere count as absent.
func TestOddInitializeIsServed(t *testing.T) {
	for _, params := range []string{
		`{}`, `null`, `[]`, `{"processId":"no","rootUri":7,"capabilities":[],"trace":null}`,
		`{"processId":99999999999999999999,"rootUri":"file:////x","workspaceFolders":[{"uri":"::"},7],"capabilities":{"general":{"positionEncodings":"utf-8"}}}`,
		`{"capabilities":{"textDocument":{"publishDiagnostics":7,"hover":{"contentFormat":{}}}},"initializationOptions":{"debounce":"x","pause":-5,"rule-pages":[]}}`,
	} {
		k := connect(t, Options{}, digests)
		k.send(`{"jsonrpc":"2.0","id":"a","method":"initialize","params":` + params + `}`)
		assert.Nil(t, k.answer(`"a"`).Error, params)
		k.open(boat, "x", 1)
		k.published(boat, 1, nil)
		k.leave()
	}
}

func TestEachPhaseAllowsItsOwnMessages(t *testing.T) {
	k := connect(t, Options{}, digests)
	place := object{"textDocument": object{"uri": boat}, "position": spot{}}
	assert.Equal(t, -32002, k.call("textDocument/hover", place).code(), "before initialize")
	assert.Equal(t, -32002, k.call("shutdown", nil).code(), "before initialize")
	k.open(boat, "early", 1)
	k.begin(nil)
	assert.Equal(t, -32600, k.call("initialize", object{}).code(), "twice")
	assert.Equal(t, "null", string(k.call("textDocument/hover", place).Result), "the early document was dropped")
	assert.Equal(t, 0, k.call("shutdown", nil).code())
	assert.Equal(t, -32600, k.call("textDocument/hover", place).code(), "after shutdown")
	assert.Equal(t, -32600, k.call("shutdown", nil).code(), "after shutdown")
	k.open(boat, "late", 2)
	k.send(`{"jsonrpc":"2.0","method":"exit"}`)
	assert.Equal(t, 0, k.exitCode())
	assert.Empty(t, k.pushed(boat))
}

func TestExitCodes(t *testing.T) {
	const exit = `{"jsonrpc":"2.0","method":"exit"}`
	for _, c := range []struct {
		name string
		do   func(k *client)
		want int
	}{
		{"exit at once", func(k *client) { k.send(exit) }, 1},
		{"exit without shutdown", func(k *client) { k.begin(nil); k.send(exit) }, 1},
		{"exit after shutdown", func(k *client) { k.begin(nil); k.call("shutdown", nil); k.send(exit) }, 0},
		{"input ends at once", func(k *client) { k.in.Close() }, 1},
		{"input ends", func(k *client) { k.begin(nil); k.in.Close() }, 1},
		{"input ends after shutdown", func(k *client) { k.begin(nil); k.call("shutdown", nil); k.in.Close() }, 0},
		{"input ends in a message", func(k *client) { k.begin(nil); k.raw("Content-Length: 9\r\n\r\n{}"); k.in.Close() }, 1},
		{"input ends in a header", func(k *client) { k.begin(nil); k.raw("Content-Le"); k.in.Close() }, 1},
		{"exit with parameters", func(k *client) { k.begin(nil); k.call("shutdown", object{}); k.notify("exit", object{}) }, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			k := connect(t, Options{}, digests)
			c.do(k)
			assert.Equal(t, c.want, k.exitCode())
		})
	}
}

func TestExitDoesNotWaitForACheck(t *testing.T) {
	k := connect(t, Options{}, stuck)
	k.begin(nil)
	k.open(boat, "x", 1)
	k.call("shutdown", nil)
	started := time.Now()
	k.send(`{"jsonrpc":"2.0","method":"exit"}`)
	assert.Equal(t, 0, k.exitCode())
	assert.Less(t, time.Since(started), time.Second)
}

// TestTraffic is the table of malformed and unusual input; after each the server still serves.
func TestTraffic(t *testing.T) {
	const hover = `{"jsonrpc":"2.0","id":50,"method":"textDocument/hover","params":`
	for _, c := range []struct {
		name string
		send func(k *client)
		id   string // "": an answer without an id
		code int
	}{
		{"no JSON", func(k *client) { k.send(`{"jsonrpc":`) }, "", -32700},
		{"not UTF-8", func(k *client) { k.send("\xff\xfe{}") }, "", -32700},
		{"a number", func(k *client) { k.send(`7`) }, "", -32600},
		{"no jsonrpc member", func(k *client) { k.send(`{"id":50,"method":"shutdown"}`) }, "", -32600},
		{"old jsonrpc", func(k *client) { k.send(`{"jsonrpc":"1.0","id":50,"method":"shutdown"}`) }, "", -32600},
		{"fractional id", func(k *client) { k.send(`{"jsonrpc":"2.0","id":1.5,"method":"shutdown"}`) }, "", -32600},
		{"batch", func(k *client) { k.send(`[{"jsonrpc":"2.0","id":50,"method":"shutdown"}]`) }, "", -32600},
		{"empty batch", func(k *client) { k.send(`[]`) }, "", -32600},
		{"too long", func(k *client) { k.send(`"` + strings.Repeat("x", maxBody) + `"`) }, "", -32600},
		{"unknown request", func(k *client) { k.send(`{"jsonrpc":"2.0","id":50,"method":"station/unknown"}`) }, "50", -32601},
		{"unknown $ request", func(k *client) { k.send(`{"jsonrpc":"2.0","id":50,"method":"$/unknown","params":7}`) }, "50", -32601},
		{"params absent", func(k *client) { k.send(`{"jsonrpc":"2.0","id":50,"method":"textDocument/hover"}`) }, "50", -32602},
		{"params null", func(k *client) { k.send(hover + `null}`) }, "50", -32602},
		{"params a list", func(k *client) { k.send(hover + `[1]}`) }, "50", -32602},
		{"params empty", func(k *client) { k.send(hover + `{}}`) }, "50", -32602},
		{"negative line", func(k *client) {
			k.send(hover + `{"textDocument":{"uri":"` + boat + `"},"position":{"line":-1,"character":0}}}`)
		}, "50", -32602},
		{"address a number", func(k *client) { k.send(hover + `{"textDocument":{"uri":7},"position":{"line":0,"character":0}}}`) }, "50", -32602},
		{"string id", func(k *client) { k.send(`{"jsonrpc":"2.0","id":"é\"","method":"no"}`) }, `"é\""`, -32601},
		{"large id", func(k *client) { k.send(`{"jsonrpc":"2.0","id":9007199254740993,"method":"no"}`) }, "9007199254740993", -32601},
		{"deep nesting in params", func(k *client) { k.send(hover + strings.Repeat("[", 200000) + strings.Repeat("]", 200000) + `}`) }, "50", -32602},
		{"header in lower case", func(k *client) {
			body := `{"jsonrpc":"2.0","id":50,"method":"no"}`
			k.raw(fmt.Sprintf("content-type: application/vscode-jsonrpc; charset=utf8\r\ncontent-length:%d\r\n\r\n%s", len(body), body))
		}, "50", -32601},
		{"header split into bytes", func(k *client) {
			body := `{"jsonrpc":"2.0","id":50,"method":"no"}`
			for _, b := range []byte(fmt.Sprintf("Content-Length: %d\r\n\r\n%s", len(body), body)) {
				k.raw(string(b))
			}
		}, "50", -32601},
	} {
		t.Run(c.name, func(t *testing.T) {
			k := connect(t, Options{}, digests)
			k.begin(nil)
			c.send(k)
			if c.id == "" {
				assert.Equal(t, c.code, k.looseError(1).code())
			} else {
				assert.Equal(t, c.code, k.answer(c.id).code())
			}
			k.open(boat, "still here", 1)
			k.published(boat, 1, nil)
			k.leave()
		})
	}
}

// TestNotificationsNeverHurt: none of these has an answer, and the server goes on.
func TestNotificationsNeverHurt(t *testing.T) {
	for _, body := range []string{
		`{"jsonrpc":"2.0","method":"station/unknown"}`,
		`{"jsonrpc":"2.0","method":"$/setTrace","params":{"value":"verbose"}}`,
		`{"jsonrpc":"2.0","method":"textDocument/didOpen"}`,
		`{"jsonrpc":"2.0","method":"textDocument/didOpen","params":{"textDocument":{"uri":7}}}`,
		`{"jsonrpc":"2.0","method":"textDocument/didOpen","params":{"textDocument":{"uri":"file:///a.converter.yaml"}}}`,
		`{"jsonrpc":"2.0","method":"textDocument/didChange","params":{"textDocument":{"uri":"file:///not-open.yaml","version":1},"contentChanges":[]}}`,
		`{"jsonrpc":"2.0","method":"textDocument/didChange","params":null}`,
		`{"jsonrpc":"2.0","method":"textDocument/didClose","params":{"textDocument":{"uri":"file:///not-open.yaml"}}}`,
		`{"jsonrpc":"2.0","method":"textDocument/didSave","params":[]}`,
		`{"jsonrpc":"2.0","method":"$/cancelRequest","params":{"id":12345678901234}}`,
		`{"jsonrpc":"2.0","method":"$/cancelRequest","params":{"id":null}}`,
		`{"jsonrpc":"2.0","method":"$/cancelRequest"}`,
		`{"jsonrpc":"2.0","method":"workspace/didChangeConfiguration","params":{"settings":null}}`,
		`{"jsonrpc":"2.0","method":"workspace/didChangeWatchedFiles","params":{"changes":[{"uri":"::"}]}}`,
		`{"jsonrpc":"2.0","method":"workspace/didChangeWorkspaceFolders","params":{"event":{"added":[{"uri":"git:x"}]}}}`,
		`{"jsonrpc":"2.0","id":777,"result":{}}`,
		`{"jsonrpc":"2.0","id":null,"error":{"code":-32600,"message":"?"}}`,
	} {
		t.Run(body, func(t *testing.T) {
			k := connect(t, Options{}, digests)
			k.begin(nil)
			k.send(body)
			k.open(boat, "still here", 1)
			k.published(boat, 1, nil)
			assert.Empty(t, k.loose)
			k.leave()
		})
	}
}

func TestBrokenFramesEndTheServerWithAReason(t *testing.T) {
	for _, bytes := range []string{
		"Content-Length: 0\r\n\r\n",
		"Content-Length: -5\r\n\r\n",
		"Content-Length: 2000000000\r\n\r\n",
		"Content-Length: 99999999999999999999\r\n\r\n",
		"Content-Length: twelve\r\n\r\n{}",
		"Content-Type: x\r\n\r\n{}",
		"GET / HTTP/1.1\r\n\r\n",
		"Content-Length: 2\r\n\r\n{}{}{}\r\n\r\n",
		strings.Repeat("x", maxHeaderLine*3) + "\r\n",
		strings.Repeat("A: b\r\n", maxHeaderLines*2),
	} {
		k := connect(t, Options{}, digests)
		k.begin(nil)
		k.raw(bytes)
		assert.Equal(t, 1, k.exitCode(), "%.40q", bytes)
		assert.Contains(t, k.log.String(), "reading a", "%.40q", bytes)
	}
}

// TestAnyAddressIsServedOrSkipped: the client's own string is sent back unchanged, and no address is a crash.
func TestAnyAddressIsServedOrSkipped(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(nil)
	for _, uri := range []string{
		"untitled:new.converter.yaml", "file:///a%20b/(x)+é%C3%A9.converter.yaml", "file:///C%3A/boats/a.converter.yaml",
		"file:///c:/boats/b.converter.yaml", "FILE:///up.converter.yaml", "file:////net/x.converter.yaml",
		"file://host/share/x.converter.yaml", "a b:c.converter.yaml", "%zz.converter.yaml", "file:///nul%00.converter.yaml",
		"relative.converter.yaml", "file:x.parts.yaml",
	} {
		k.open(uri, "text", 4)
		assert.Equal(t, digest("text"), k.published(uri, 4, nil).Diagnostics[0].Message, uri)
		k.close(uri)
		k.cleared(uri)
	}
	for _, uri := range []string{"", "untitled:Untitled-1", "git:/x/a.yaml?{}", "file:///plain.yaml", "file:///.parts.yaml"} {
		k.open(uri, "text", 4)
		k.close(uri)
	}
	k.open(boat, "x", 1)
	k.published(boat, 1, nil)
	assert.Empty(t, k.pushed("file:///plain.yaml"), "not one of our kinds of file")
	k.leave()
}

func TestFloodOfRequestsIsAnswered(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(nil)
	k.open(boat, "format: 1\n", 1)
	var last string
	for range 5000 {
		last = k.ask("textDocument/hover", object{"textDocument": object{"uri": boat}, "position": spot{0, 1}})
	}
	k.answer(last)
	k.must("all answers", func() bool { return len(k.replies) >= 5001 })
	k.leave()
}

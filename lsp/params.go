package lsp

import (
	"encoding/json"
	"errors"

	"go.lsp.dev/jsonrpc2"
)

// The parameters of document messages are small structs of our own: the library's reject a whole message for one odd
// member, rewrite the document's address, and take a change with a malformed range for one of the whole text.

// position is a place as the client counts it; a negative or fractional number does not decode.
type position struct {
	Line      uint32 `json:"line"`
	Character uint32 `json:"character"`
}

type span struct {
	Start *position `json:"start"`
	End   *position `json:"end"`
}

type documentID struct {
	URI     *string `json:"uri"`
	Version *int32  `json:"version"`
}

type openParams struct {
	Document struct {
		documentID
		Text *string `json:"text"`
	} `json:"textDocument"`
}

type changeParams struct {
	Document documentID `json:"textDocument"`
	Changes  []change   `json:"contentChanges"`
}

// change is one content change; without a range it is the whole text.
type change struct {
	Range *span   `json:"range"`
	Text  *string `json:"text"`
}

type closeParams struct {
	Document documentID `json:"textDocument"`
}

type placeParams struct {
	Document documentID `json:"textDocument"`
	Position *position  `json:"position"`
}

type watchedParams struct {
	Changes []struct {
		URI string `json:"uri"`
	} `json:"changes"`
}

type foldersParams struct {
	Event struct {
		Added   []folder `json:"added"`
		Removed []folder `json:"removed"`
	} `json:"event"`
}

type folder struct {
	URI string `json:"uri"`
}

var errParams = errors.New("a needed parameter is missing")

// valid tells what a message lacks, as an error.
func (p *openParams) valid() bool  { return p.Document.URI != nil && p.Document.Text != nil }
func (p *closeParams) valid() bool { return p.Document.URI != nil }
func (p *placeParams) valid() bool { return p.Document.URI != nil && p.Position != nil }

func (p *changeParams) valid() bool {
	if p.Document.URI == nil {
		return false
	}
	for _, c := range p.Changes {
		if c.Text == nil || c.Range != nil && (c.Range.Start == nil || c.Range.End == nil) {
			return false
		}
	}
	return true
}

// decode reads parameters; absent, null and mistyped ones are the same error to the client.
func decode(raw json.RawMessage, into interface{ valid() bool }) error {
	if len(raw) == 0 {
		return jsonrpc2.NewError(jsonrpc2.InvalidParams, errParams.Error())
	}
	if err := json.Unmarshal(raw, into); err != nil {
		return jsonrpc2.NewError(jsonrpc2.InvalidParams, err.Error())
	}
	if !into.valid() {
		return jsonrpc2.NewError(jsonrpc2.InvalidParams, errParams.Error())
	}
	return nil
}

// member walks into an object; an odd value on the way counts as absent, and so does null.
func member(raw json.RawMessage, path ...string) json.RawMessage {
	for _, key := range path {
		var object map[string]json.RawMessage
		if json.Unmarshal(raw, &object) != nil {
			return nil
		}
		raw = object[key]
	}
	if string(raw) == "null" {
		return nil
	}
	return raw
}

// reads decodes a member into the zero value's type; whatever does not fit is the zero value.
func reads[T any](raw json.RawMessage, path ...string) T {
	var v, zero T
	if at := member(raw, path...); at == nil || json.Unmarshal(at, &v) != nil {
		return zero
	}
	return v
}

// requestID reads the id of a cancelled request: any 64-bit integer or string.
func requestID(raw json.RawMessage) (id jsonrpc2.ID, ok bool) {
	var n int64
	var t string
	switch {
	case len(raw) == 0 || string(raw) == "null":
		return id, false
	case json.Unmarshal(raw, &n) == nil:
		return jsonrpc2.NewNumberID(n), true
	case json.Unmarshal(raw, &t) == nil:
		return jsonrpc2.NewStringID(t), true
	}
	return id, false
}

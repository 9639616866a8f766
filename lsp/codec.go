package lsp

import (
	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"
)

// codec encodes the protocol library's types by its own quick encoders and passes values that are encoded already.
type codec struct{}

func (codec) Marshal(v any) ([]byte, error) {
	if raw, ok := v.(jsonrpc2.RawMessage); ok {
		return jsonrpc2.JSONCodec{}.Marshal(raw)
	}
	return protocol.Marshal(v)
}

func (codec) Unmarshal(data []byte, v any) error {
	if raw, ok := v.(*jsonrpc2.RawMessage); ok {
		return jsonrpc2.JSONCodec{}.Unmarshal(data, raw)
	}
	return protocol.Unmarshal(data, v)
}

// encoded marshals a result here, under the recover of our own handler; nil stays nil and goes out as null.
func encoded(v any, err error) (any, error) {
	if v == nil || err != nil {
		return nil, err
	}
	raw, err := protocol.Marshal(v)
	return jsonrpc2.RawMessage(raw), err
}

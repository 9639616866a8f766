package lsp

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"

	"go.lsp.dev/jsonrpc2"
)

const (
	// maxBody is the largest message that is read, in bytes: four times the largest spec file, so that one of 4 MB with
	// every character escaped by the client still arrives. A longer message is drained and refused.
	maxBody = 16 << 20
	// maxAnnounced is the longest message that is drained, in bytes; whoever announces more is not speaking the protocol.
	maxAnnounced = 1 << 30
	// maxHeaderLine and maxHeaderLines bound a message's header; real ones have two short lines.
	maxHeaderLine  = 8 << 10
	maxHeaderLines = 32
)

// frames is the connection's stream: LSP's header framing with limits. It has no frame-reading extension of the library,
// so the connection takes whole messages from Read and a bad body costs one message instead of the connection.
type frames struct {
	in  *bufio.Reader
	out *outbox
	end func(error) // told once reading is over; nil for a clean end
}

func newFrames(in io.Reader, out *outbox, end func(error)) *frames {
	return &frames{in: bufio.NewReaderSize(in, maxHeaderLine), out: out, end: end}
}

// Read gives the next message that has the shape of one. A body that has not is answered here: −32700 when it is no JSON,
// −32600 when it is too long or no single JSON-RPC 2.0 message.
func (f *frames) Read(ctx context.Context) (jsonrpc2.Message, int64, error) {
	for {
		body, n, err := f.body()
		if err == nil {
			err = ctx.Err()
		}
		if err != nil {
			f.end(err)
			return nil, 0, err
		}
		if body == nil {
			f.refuse(jsonrpc2.InvalidRequest, fmt.Sprintf("a message of %d bytes is too long, expected at most %d", n, maxBody))
			continue
		}
		msg, err := jsonrpc2.DecodeMessage(body)
		if err == nil {
			return msg, n, nil
		}
		code := jsonrpc2.ParseError
		if json.Valid(body) {
			code = jsonrpc2.InvalidRequest
		}
		f.refuse(code, err.Error())
	}
}

// refuse answers a message that has no usable id.
func (f *frames) refuse(code jsonrpc2.Code, why string) {
	f.out.put(jsonrpc2.AppendResponse(nil, jsonrpc2.ID{}, nil, jsonrpc2.NewError(code, why)))
}

// body reads one header and its body. The body is nil when it was longer than maxBody; the buffer grows with what
// arrives, not with what was announced.
func (f *frames) body() ([]byte, int64, error) {
	n, err := f.header()
	if err != nil {
		return nil, 0, err
	}
	if n > maxBody {
		_, err = io.CopyN(io.Discard, f.in, n)
		return nil, n, short(err)
	}
	var body bytes.Buffer
	_, err = io.CopyN(&body, f.in, n)
	return body.Bytes(), n, short(err)
}

// short names an end of the input inside a message as what it is.
func short(err error) error {
	if errors.Is(err, io.EOF) {
		return fmt.Errorf("reading a message: %w", io.ErrUnexpectedEOF)
	}
	return err
}

// header reads the lines up to the empty one and gives the announced length. Names of fields are compared without case.
func (f *frames) header() (int64, error) {
	length := int64(0)
	for line := 0; ; line++ {
		raw, err := f.in.ReadSlice('\n')
		switch {
		case errors.Is(err, io.EOF) && line == 0 && len(raw) == 0:
			return 0, io.EOF
		case err != nil:
			return 0, fmt.Errorf("reading a header: %w", short(err))
		case line > maxHeaderLines:
			return 0, fmt.Errorf("reading a header: more than %d lines", maxHeaderLines)
		}
		text := strings.TrimRight(string(raw), "\r\n")
		if text == "" {
			break
		}
		name, value, found := strings.Cut(text, ":")
		if !found {
			return 0, fmt.Errorf("reading a header: %.40q is no field", text)
		}
		if !strings.EqualFold(strings.TrimSpace(name), "Content-Length") {
			continue
		}
		length, err = strconv.ParseInt(strings.TrimSpace(value), 10, 64)
		if err != nil || length <= 0 || length > maxAnnounced {
			return 0, fmt.Errorf("reading a header: %.40q is no usable length", text)
		}
	}
	if length == 0 {
		return 0, errors.New("reading a header: no Content-Length")
	}
	return length, nil
}

// Write puts a message into the outbox. It never waits for the client, so that a client that writes without reading
// cannot hold up the read loop.
func (f *frames) Write(_ context.Context, msg jsonrpc2.Message) (int64, error) {
	body := jsonrpc2.AppendMessage(nil, msg)
	return int64(len(body)), f.out.put(body)
}

// Close does nothing: the server ends by its own rules (server.go), and the streams belong to its caller.
func (f *frames) Close() error { return nil }

package lsp

import (
	"bufio"
	"context"
	"encoding/json"
	"fmt"
	"io"
	"net/textproto"
	"os"
	"strconv"
	"sync"
	"testing"
	"time"

	"github.com/stretchr/testify/require"
)

// serveVariable makes the test program be the server: for the tests that need a process of its own.
const serveVariable = "HALFPLANE_TEST_SERVE"

func TestMain(m *testing.M) {
	if os.Getenv(serveVariable) != "" {
		os.Exit(Serve(context.Background(), os.Stdin, os.Stdout, os.Stderr, Options{Version: "test"}))
	}
	os.Exit(m.Run())
}

// client speaks the protocol to a server over a pair of streams. It knows nothing of the server's types.
type client struct {
	t    testing.TB
	in   io.WriteCloser
	code chan int
	log  *lockedBuffer

	mu       sync.Mutex
	arrived  sync.Cond
	next     int
	replies  map[string]reply
	loose    []reply // without a usable id
	pushes   []push
	requests []message
	over     bool
	notLSP   string
}

type message struct {
	JSONRPC string          `json:"jsonrpc"`
	ID      json.RawMessage `json:"id"`
	Method  string          `json:"method"`
	Params  json.RawMessage `json:"params"`
	Result  json.RawMessage `json:"result"`
	Error   *replyError     `json:"error"`
}

type reply struct {
	Result json.RawMessage
	Error  *replyError
	at     time.Time
}

type replyError struct {
	Code    int    `json:"code"`
	Message string `json:"message"`
}

func (r reply) code() int {
	if r.Error == nil {
		return 0
	}
	return r.Error.Code
}

// push is one publishDiagnostics.
type push struct {
	URI         string       `json:"uri"`
	Version     *int32       `json:"version"`
	Diagnostics []diagnostic `json:"diagnostics"`
	at          time.Time
	raw         string
}

type diagnostic struct {
	Range           area                   `json:"range"`
	Severity        int                    `json:"severity"`
	Code            string                 `json:"code"`
	CodeDescription *struct{ Href string } `json:"codeDescription"`
	Source          string                 `json:"source"`
	Message         string                 `json:"message"`
	Tags            []int                  `json:"tags"`
	Related         []relatedPlace         `json:"relatedInformation"`
}

type relatedPlace struct {
	Location struct {
		URI   string `json:"uri"`
		Range area   `json:"range"`
	} `json:"location"`
	Message string `json:"message"`
}

type spot struct {
	Line      int `json:"line"`
	Character int `json:"character"`
}

type area struct {
	Start spot `json:"start"`
	End   spot `json:"end"`
}

// lockedBuffer is a log that two goroutines may touch.
type lockedBuffer struct {
	mu   sync.Mutex
	text []byte
}

func (b *lockedBuffer) Write(p []byte) (int, error) {
	b.mu.Lock()
	defer b.mu.Unlock()
	b.text = append(b.text, p...)
	return len(p), nil
}

func (b *lockedBuffer) String() string {
	b.mu.Lock()
	defer b.mu.Unlock()
	return string(b.text)
}

// connect starts a server in this process, with pipes between, and a client for it.
func connect(t testing.TB, o Options, c checker) *client {
	toServer, fromClient := io.Pipe()
	toClient, fromServer := io.Pipe()
	k := newClient(t, fromClient, toClient)
	go func() {
		code := serve(context.Background(), toServer, fromServer, k.log, o, c)
		fromServer.Close()
		toServer.Close()
		k.code <- code
	}()
	t.Cleanup(func() { fromClient.Close() })
	return k
}

func newClient(t testing.TB, in io.WriteCloser, out io.Reader) *client {
	k := &client{t: t, in: in, code: make(chan int, 1), log: &lockedBuffer{}, replies: map[string]reply{}}
	k.arrived.L = &k.mu
	go k.read(bufio.NewReader(out))
	return k
}

// read takes everything that the server writes until its end.
func (k *client) read(r *bufio.Reader) {
	defer func() {
		k.mu.Lock()
		k.over = true
		k.arrived.Broadcast()
		k.mu.Unlock()
	}()
	for {
		header, err := textproto.NewReader(r).ReadMIMEHeader()
		if err != nil {
			if err != io.EOF {
				k.mu.Lock()
				k.notLSP = err.Error()
				k.mu.Unlock()
			}
			return
		}
		n, err := strconv.Atoi(header.Get("Content-Length"))
		body := make([]byte, max(n, 0))
		if err == nil {
			_, err = io.ReadFull(r, body)
		}
		var m message
		if err == nil {
			err = json.Unmarshal(body, &m)
		}
		if err != nil || m.JSONRPC != "2.0" {
			k.mu.Lock()
			k.notLSP = fmt.Sprintf("%v in %.80q", err, body)
			k.mu.Unlock()
			return
		}
		k.take(m)
	}
}

func (k *client) take(m message) {
	k.mu.Lock()
	defer k.mu.Unlock()
	defer k.arrived.Broadcast()
	now := time.Now()
	switch {
	case m.Method == "textDocument/publishDiagnostics":
		p := push{at: now, raw: string(m.Params)}
		if json.Unmarshal(m.Params, &p) != nil || p.Diagnostics == nil {
			k.notLSP = "publishDiagnostics without an array: " + p.raw
		}
		k.pushes = append(k.pushes, p)
	case m.Method != "" && m.ID != nil:
		k.requests = append(k.requests, m)
		go k.send(fmt.Sprintf(`{"jsonrpc":"2.0","id":%s,"result":null}`, m.ID))
	case m.Method != "":
	case m.ID == nil || string(m.ID) == "null":
		k.loose = append(k.loose, reply{m.Result, m.Error, now})
	default:
		k.replies[string(m.ID)] = reply{m.Result, m.Error, now}
	}
}

// send frames a body.
func (k *client) send(body string) {
	k.raw(fmt.Sprintf("Content-Length: %d\r\n\r\n%s", len(body), body))
}

// raw writes bytes as they are. A server that has ended takes none, which is not this function's business.
func (k *client) raw(bytes string) { _, _ = io.WriteString(k.in, bytes) }

func encode(t testing.TB, v any) string {
	b, err := json.Marshal(v)
	require.NoError(t, err)
	return string(b)
}

func (k *client) notify(method string, params any) {
	k.send(fmt.Sprintf(`{"jsonrpc":"2.0","method":%q,"params":%s}`, method, encode(k.t, params)))
}

// ask sends a request and gives its id, as it stands on the wire.
func (k *client) ask(method string, params any) string {
	k.mu.Lock()
	k.next++
	id := strconv.Itoa(k.next)
	k.mu.Unlock()
	k.send(fmt.Sprintf(`{"jsonrpc":"2.0","id":%s,"method":%q,"params":%s}`, id, method, encode(k.t, params)))
	return id
}

const wait = 10 * time.Second

// until waits for a condition on what has arrived; the condition is called under the lock.
func (k *client) until(what string, limit time.Duration, met func() bool) bool {
	timer := time.AfterFunc(limit, func() {
		k.mu.Lock()
		k.arrived.Broadcast()
		k.mu.Unlock()
	})
	defer timer.Stop()
	end := time.Now().Add(limit)
	k.mu.Lock()
	defer k.mu.Unlock()
	for !met() {
		if k.over || !time.Now().Before(end) {
			return met()
		}
		k.arrived.Wait()
	}
	return true
}

func (k *client) must(what string, met func() bool) {
	k.t.Helper()
	if !k.until(what, wait, met) {
		k.t.Fatalf("%s did not come; the server's log:\n%s", what, k.log)
	}
}

func (k *client) answer(id string) (r reply) {
	k.t.Helper()
	k.must("the answer to "+id, func() (ok bool) { r, ok = k.replies[id]; return ok })
	return r
}

func (k *client) call(method string, params any) reply {
	k.t.Helper()
	return k.answer(k.ask(method, params))
}

// looseError waits for the n-th answer without an id.
func (k *client) looseError(n int) (r reply) {
	k.t.Helper()
	k.must("an answer without an id", func() bool {
		if len(k.loose) < n {
			return false
		}
		r = k.loose[n-1]
		return true
	})
	return r
}

package lsp

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"sync"
	"time"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/protocol"

	"halfplane/schema"
	"halfplane/workspace"
)

// Options say how the server runs. The zero value is fit for use.
type Options struct {
	Version   string        // of the program, told to the client
	Jobs      int           // corners at once; 0: as many as the machine runs
	Root      string        // workspace folder of every file; "": each file's own
	Debounce  time.Duration // before the quick check after a change; 0: none
	Pause     time.Duration // without a change before the full check; 0: DefaultPause
	Today     func() string // the day that waivers are judged on, YYYY-MM-DD; nil: the local date
	RulePages string        // address to which "#RULE" is added; "": the catalogue page beside the program, if there is one
}

// today is the day that waivers are judged on; a server that runs for weeks asks again.
func (o Options) today() string {
	if o.Today != nil {
		return o.Today()
	}
	return time.Now().Format(time.DateOnly)
}

// DefaultPause is how long typing must pause before the full check. Fifty words a minute are five keys a second with the
// spaces, 200 to 240 ms from key to key: longer than that, and short enough to be there when one looks up.
const DefaultPause = 300 * time.Millisecond

// patience is how long the last answers may take to leave when the server ends.
const patience = time.Second

// checker is Workspace.CheckDocument; tests put a slow or failing one in its place.
type checker func(context.Context, *workspace.Workspace, *schema.Document, workspace.Options) workspace.File

func check(ctx context.Context, w *workspace.Workspace, doc *schema.Document, o workspace.Options) workspace.File {
	return w.CheckDocument(ctx, doc, o)
}

// server is one connection's state.
type server struct {
	o      Options
	log    *slog.Logger
	check  checker
	root   context.Context // ends with the server
	conn   jsonrpc2.Conn
	client protocol.Client
	out    *outbox
	ended  chan int // the exit code, once
	ending sync.Once
	full   chan struct{} // held by the one full check that runs

	// Touched on the read loop only, before a request is released.
	phase phase

	// Set by initialize and not changed after.
	can     abilities
	columns schema.Encoding

	calls calls

	mu       sync.Mutex // guards what follows, and every publish
	settings settings
	folders  []string // of the client's workspace, as paths
	desks    map[string]*desk
	spaces   map[string]*workspace.Workspace // by root
	shedding *time.Timer                     // until memory is given back; nil: never needed so far
}

// Serve runs the server over a pair of streams until the client says exit, the input ends, the client's process dies or
// ctx is done, and gives the exit code: 0 after a proper shutdown, else 1. Nothing but the protocol is written to out;
// what happens beside it goes to log. Serve never ends the process; a reader that is still blocked in in is left behind.
func Serve(ctx context.Context, in io.Reader, out io.Writer, log io.Writer, o Options) int {
	defer roomy()()
	return serve(ctx, in, out, log, o, check)
}

func serve(ctx context.Context, in io.Reader, out, log io.Writer, o Options, c checker) int {
	root, cancel := context.WithCancel(ctx)
	defer cancel()
	s := &server{
		o:       o,
		log:     slog.New(slog.NewTextHandler(log, nil)),
		check:   c,
		root:    root,
		ended:   make(chan int, 1),
		full:    make(chan struct{}, 1),
		phase:   fresh,
		columns: schema.UTF16,
		desks:   map[string]*desk{},
		spaces:  map[string]*workspace.Workspace{},
	}
	s.settings = settings{debounce: o.Debounce, pause: o.Pause, pages: o.RulePages}
	if s.settings.pages == "" {
		s.settings.pages = installed()
	}
	if s.settings.pause <= 0 {
		s.settings.pause = DefaultPause
	}
	s.out = newOutbox(out, func(err error) { s.finish(1, fmt.Errorf("writing to the client: %w", err)) })
	s.conn = jsonrpc2.NewConn(newFrames(in, s.out, s.inputOver), jsonrpc2.WithCodec(codec{}))
	s.client = protocol.ClientDispatcher(s.conn)
	s.conn.Go(root, s.handle)
	go warm()

	code := 1
	select {
	case code = <-s.ended:
	case <-ctx.Done():
	}
	cancel() // before the outbox closes: a check that runs now must not find it closed
	s.out.close(patience)
	return code
}

// warm has the schemas made ready while client and server still shake hands: some 30 ms that the first document would
// otherwise wait for.
func warm() { _, _ = schema.Validate(schema.Read("warm.converter.yaml", nil, 0), nil) }

// finish ends the server with an exit code; only the first call counts.
func (s *server) finish(code int, reason error) {
	s.ending.Do(func() {
		if reason != nil {
			s.log.Error("the connection ends", "reason", reason)
		}
		s.ended <- code
	})
}

// inputOver is told by the stream that nothing more will be read.
func (s *server) inputOver(err error) {
	switch {
	case errors.Is(err, context.Canceled):
	case !errors.Is(err, io.EOF):
		s.finish(1, err)
	case s.phase == down:
		s.finish(0, nil)
	default:
		s.finish(1, errors.New("the input ended without shutdown"))
	}
}

package lsp

import (
	"context"
	"fmt"
	"runtime"
	"sync/atomic"
	"testing"
	"time"

	"github.com/stretchr/testify/assert"
	"github.com/stretchr/testify/require"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/schema"
	"halfplane/workspace"
)

// stuck is a checker that ends only when it is cancelled.
func stuck(ctx context.Context, _ *workspace.Workspace, doc *schema.Document, _ workspace.Options) workspace.File {
	<-ctx.Done()
	return workspace.File{Document: doc}
}

// deaf is a checker that takes its time and hears no cancelling: its results come when they are stale.
func deaf(ctx context.Context, w *workspace.Workspace, doc *schema.Document, o workspace.Options) workspace.File {
	time.Sleep(3 * time.Millisecond)
	return digests(ctx, w, doc, o)
}

// full tells diagnostics of digests' full check.
func full(d []diagnostic) bool { return len(d) == 1 && d[0].Severity == 3 }

func quick(d []diagnostic) bool { return len(d) == 1 && d[0].Severity == 2 }

// versionsRise checks that no publish for a version follows one for a later one, and that each carries one.
func versionsRise(t *testing.T, pushes []push) {
	t.Helper()
	last := int32(-1)
	for _, p := range pushes {
		require.NotNil(t, p.Version, p.raw)
		require.GreaterOrEqual(t, *p.Version, last, "a stale publish")
		last = *p.Version
	}
}

func TestQuickAtOnceThenFullWhenTypingPauses(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(object{"pause": 150})
	k.open(boat, "one", 1)
	first := k.published(boat, 1, quick)
	second := k.published(boat, 1, full)
	assert.InDelta(t, 0.150, second.at.Sub(first.at).Seconds(), 0.1)
	k.change(boat, 2, whole("two"))
	k.change(boat, 3, whole("three"))
	k.published(boat, 3, full)
	for _, p := range k.pushed(boat) {
		assert.False(t, *p.Version == 2 && full(p.Diagnostics), "a full check of a text that was not rested on")
	}
	versionsRise(t, k.pushed(boat))
	k.leave()
}

func TestFullCheckThatAgreesIsNotSentAgain(t *testing.T) {
	same := func(_ context.Context, _ *workspace.Workspace, doc *schema.Document, o workspace.Options) workspace.File {
		return workspace.File{Document: doc}
	}
	k := connect(t, Options{}, same)
	k.begin(object{"pause": 10})
	k.open(boat, "one", 1)
	k.published(boat, 1, nil)
	time.Sleep(100 * time.Millisecond)
	assert.Len(t, k.pushed(boat), 1)
	k.leave()
}

func TestChangeCancelsTheCheckThatRuns(t *testing.T) {
	var started, cancelled atomic.Int32
	slowFirst := func(ctx context.Context, w *workspace.Workspace, doc *schema.Document, o workspace.Options) workspace.File {
		if started.Add(1) == 1 {
			<-ctx.Done()
			cancelled.Add(1)
		}
		return digests(ctx, w, doc, o)
	}
	k := connect(t, Options{}, slowFirst)
	k.begin(nil)
	k.open(boat, "one", 1)
	for started.Load() == 0 {
		time.Sleep(time.Millisecond)
	}
	at := time.Now()
	k.change(boat, 2, whole("two"))
	p := k.published(boat, 2, nil)
	assert.Less(t, p.at.Sub(at), 500*time.Millisecond)
	assert.EqualValues(t, 1, cancelled.Load())
	for _, p := range k.pushed(boat) {
		assert.EqualValues(t, 2, *p.Version, "the cancelled check was published")
	}
	k.leave()
}

func TestStaleResultIsNeverPublished(t *testing.T) {
	k := connect(t, Options{}, deaf)
	k.begin(object{"pause": 1})
	k.open(boat, "v0", 0)
	const last = 400
	for v := 1; v <= last; v++ {
		k.change(boat, v, whole(fmt.Sprint("v", v)))
		if v%40 == 0 {
			time.Sleep(8 * time.Millisecond)
		}
	}
	k.published(boat, last, full)
	pushes := k.pushed(boat)
	versionsRise(t, pushes)
	for _, p := range pushes {
		require.Equal(t, digest(fmt.Sprint("v", *p.Version)), p.Diagnostics[0].Message, "text and version belong together")
	}
	assert.Less(t, len(pushes), last, "old texts are skipped")
	k.leave()
}

func TestCloseClearsAndReopeningShowsAgain(t *testing.T) {
	k := connect(t, Options{}, deaf)
	k.begin(object{"pause": 1})
	for range 30 {
		k.open(boat, "text", 5)
		k.published(boat, 5, nil)
		k.close(boat)
	}
	k.must("all closings", func() bool {
		n := 0
		for _, p := range k.pushes {
			if p.Version == nil {
				n++
			}
		}
		return n == 30
	})
	time.Sleep(50 * time.Millisecond)
	pushes := k.pushed(boat)
	assert.Nil(t, pushes[len(pushes)-1].Version, "the last word is the clearing")
	k.open(boat, "text", 1)
	assert.Equal(t, digest("text"), k.published(boat, 1, nil).Diagnostics[0].Message)
	k.leave()
}

func TestDebounceCanBeSet(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(object{"debounce": 200, "pause": 60000})
	k.open(boat, "v0", 0)
	for v := 1; v <= 20; v++ {
		k.change(boat, v, whole(fmt.Sprint("v", v)))
		time.Sleep(5 * time.Millisecond)
	}
	k.published(boat, 20, nil)
	assert.LessOrEqual(t, len(k.pushed(boat)), 2)
	k.notify("workspace/didChangeConfiguration", object{"settings": object{"halfplane": object{"debounce": 0}}})
	at := time.Now()
	k.change(boat, 21, whole("v21"))
	assert.Less(t, k.published(boat, 21, nil).at.Sub(at), 150*time.Millisecond)
	k.leave()
}

func TestHoverDoesNotWaitForASlowCheck(t *testing.T) {
	k := connect(t, Options{}, stuck)
	k.begin(nil)
	k.open(boat, "format: 1\ninductor: {inductance: 22 µH ± 20 %}\n", 1)
	at := time.Now()
	text, _ := k.hoverAt(boat, spot{1, 25})
	assert.Less(t, time.Since(at), 200*time.Millisecond)
	assert.Contains(t, text, "22.0 µH", "what needs no check is shown")
	k.leave()
}

func TestCancelledRequestIsAnsweredAtOnce(t *testing.T) {
	k := connect(t, Options{}, stuck)
	k.begin(nil)
	k.open(boat, "format: 1\n", 1)
	cancelled := 0
	for i := range 50 { // a hover may win the race against its cancelling
		id := fmt.Sprintf(`"station %d"`, i)
		k.send(`{"jsonrpc":"2.0","id":` + id + `,"method":"textDocument/hover","params":{"textDocument":{"uri":"` + boat + `"},"position":{"line":0,"character":1}}}`)
		k.send(`{"jsonrpc":"2.0","method":"$/cancelRequest","params":{"id":` + id + `}}`)
		at := time.Now()
		if r := k.answer(id); r.Error != nil {
			assert.Equal(t, -32800, r.code())
			assert.Less(t, r.at.Sub(at), 50*time.Millisecond)
			cancelled++
		}
	}
	assert.Positive(t, cancelled)
	k.leave()
}

func TestPanicInACheckCostsOneFinding(t *testing.T) {
	failing := func(ctx context.Context, w *workspace.Workspace, doc *schema.Document, o workspace.Options) workspace.File {
		if string(doc.Text) == "bad" {
			panic("a defect")
		}
		return digests(ctx, w, doc, o)
	}
	k := connect(t, Options{}, failing)
	k.begin(nil)
	k.open(boat, "bad", 1)
	d := k.published(boat, 1, nil).Diagnostics
	require.Len(t, d, 1)
	assert.Equal(t, "internal", d[0].Code)
	assert.Contains(t, k.log.String(), "a defect")
	k.change(boat, 2, whole("good"))
	assert.Equal(t, digest("good"), k.published(boat, 2, nil).Diagnostics[0].Message)
	k.leave()
}

func TestOneFullCheckRunsAtATime(t *testing.T) {
	var now, most atomic.Int32
	counting := func(ctx context.Context, w *workspace.Workspace, doc *schema.Document, o workspace.Options) workspace.File {
		if o.Depth == analysis.Full {
			if n := now.Add(1); n > most.Load() {
				most.Store(n)
			}
			time.Sleep(5 * time.Millisecond)
			now.Add(-1)
		}
		return digests(ctx, w, doc, o)
	}
	k := connect(t, Options{}, counting)
	k.begin(object{"pause": 1})
	for i := range 8 {
		k.open(fmt.Sprintf("file:///station/%d.converter.yaml", i), "x", 1)
	}
	for i := range 8 {
		k.published(fmt.Sprintf("file:///station/%d.converter.yaml", i), 1, full)
	}
	assert.EqualValues(t, 1, most.Load())
	k.leave()
}

func TestClosedDocumentsLeaveNoGoroutineBehind(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(nil)
	k.open(boat, "x", 1)
	k.published(boat, 1, nil)
	before := runtime.NumGoroutine()
	for i := range 300 {
		uri := fmt.Sprintf("file:///station/%d.converter.yaml", i)
		k.open(uri, "x", 1)
		k.close(uri)
	}
	k.change(boat, 2, whole("y"))
	k.published(boat, 2, nil)
	deadline := time.Now().Add(wait)
	for runtime.NumGoroutine() > before+3 && time.Now().Before(deadline) {
		time.Sleep(10 * time.Millisecond)
	}
	assert.LessOrEqual(t, runtime.NumGoroutine(), before+3)
	k.leave()
}

// TestClientThatDoesNotReadDoesNotHoldUpTheReadLoop: the client writes a thousand changes before it reads one answer.
func TestClientThatDoesNotReadDoesNotHoldUpTheReadLoop(t *testing.T) {
	k := connect(t, Options{}, digests)
	k.begin(nil)
	k.open(boat, "v0", 0)
	k.mu.Lock() // the client's reader stops at the next message
	done := make(chan struct{})
	go func() {
		for v := 1; v <= 1000; v++ {
			k.change(boat, v, whole(fmt.Sprint("v", v)))
		}
		close(done)
	}()
	select {
	case <-done:
	case <-time.After(wait):
		t.Error("the server stopped reading")
	}
	k.mu.Unlock()
	k.published(boat, 1000, nil)
	k.leave()
}

func TestSeverityOfAFindingIsKept(t *testing.T) {
	all := func(_ context.Context, _ *workspace.Workspace, doc *schema.Document, _ workspace.Options) workspace.File {
		var f []rules.Finding
		for i, s := range []rules.Severity{rules.Error, rules.Warning, rules.Note, rules.None} {
			f = append(f, rules.Finding{Rule: fmt.Sprint("rule-", i), Severity: s, Message: "m", Doc: doc, Start: i, End: i + 1})
		}
		f = append(f, rules.Finding{Rule: "effect", Severity: rules.Error, Message: "m", Doc: doc, Cause: &rules.Cause{Rule: "rule-0"}})
		f = append(f, rules.Finding{Rule: "waiver-unused", Severity: rules.Warning, Message: "m", Doc: doc, CornerWords: "9.00 V in"})
		return workspace.File{Document: doc, Findings: f}
	}
	k := connect(t, Options{RulePages: "https://station.example/rules"}, all)
	k.begin(nil)
	k.open(boat, "abcdef", 1)
	d := k.published(boat, 1, nil).Diagnostics
	require.Len(t, d, 5, "a finding of severity none is not shown")
	for i, want := range []int{1, 2, 3, 4, 2} {
		assert.Equal(t, want, d[i].Severity, d[i].Code)
		assert.Equal(t, "halfplane", d[i].Source)
		assert.Equal(t, "https://station.example/rules#"+d[i].Code, d[i].CodeDescription.Href)
	}
	assert.Contains(t, d[3].Related[0].Message, "follows from rule-0")
	assert.Equal(t, "worst at 9.00 V in", d[4].Related[0].Message)
	assert.Equal(t, []int{1}, d[4].Tags)
	k.leave()
}

package lsp

import (
	"context"
	"fmt"
	"runtime"
	"runtime/debug"
	"time"

	"halfplane/analysis"
	"halfplane/rules"
	"halfplane/workspace"
)

// work is the goroutine of one open document. It checks the newest text, quick at once and in full when nothing has
// changed for a while; texts that were replaced before it came to them are skipped.
func (s *server) work(d *desk) {
	for {
		select {
		case <-d.gone:
			return
		case <-s.root.Done():
			return
		case <-d.wake:
		}
		ctx, snap, set := s.take(d)
		if sleep(ctx, set.debounce) {
			s.adopt(ctx, d, snap)
			s.pass(ctx, d, snap, analysis.Quick)
		}
		close(snap.ready)
		if sleep(ctx, set.pause) && s.turn(ctx) {
			s.pass(ctx, d, snap, analysis.Full)
			<-s.full
		}
	}
}

// take gives the newest snapshot with the context that ends when it is no longer that.
func (s *server) take(d *desk) (context.Context, *snapshot, settings) {
	s.mu.Lock()
	defer s.mu.Unlock()
	// The same snapshot cannot be taken twice: a wake-up that is left over from before finds a cancelled context.
	select {
	case <-d.wake:
	default:
	}
	return d.ctx, d.current, s.settings
}

// sleep waits, and tells whether the wait was not cut short.
func sleep(ctx context.Context, for_ time.Duration) bool {
	if for_ <= 0 {
		return ctx.Err() == nil
	}
	timer := time.NewTimer(for_)
	defer timer.Stop()
	select {
	case <-timer.C:
		return true
	case <-ctx.Done():
		return false
	}
}

// turn waits for the right to a full check. There is one at a time, so that a window full of designs is looked at one by
// one and the quick check of the one that is typed in does not wait for the others.
func (s *server) turn(ctx context.Context) bool {
	select {
	case s.full <- struct{}{}:
		return true
	case <-ctx.Done():
		return false
	}
}

// jobs leaves one core to the quick check of what is typed meanwhile when a full check runs.
func (s *server) jobs(depth analysis.Depth) int {
	if s.o.Jobs > 0 || depth == analysis.Quick {
		return s.o.Jobs
	}
	return max(1, runtime.NumCPU()-1)
}

// pass checks a snapshot and publishes the result if it is still the newest.
func (s *server) pass(ctx context.Context, d *desk, snap *snapshot, depth analysis.Depth) {
	file := s.checked(ctx, d, snap, depth)
	if ctx.Err() != nil {
		return
	}
	s.publish(d, snap, file)
}

// checked asks the workspace; a panic that it lets through becomes a finding, as one inside it does.
func (s *server) checked(ctx context.Context, d *desk, snap *snapshot, depth analysis.Depth) (file workspace.File) {
	defer func() {
		if cause := recover(); cause != nil {
			s.log.Error("panic", "document", d.uri, "value", cause, "stack", string(debug.Stack()))
			file = workspace.File{Path: d.name, Status: workspace.Unreadable, Defect: true, Findings: []rules.Finding{{
				Rule: "internal", Severity: rules.Error,
				Message: fmt.Sprintf("the program itself failed on this file (%v): this is a defect of halfplane, please report it with the file", cause),
			}}}
		}
	}()
	return s.check(ctx, d.space, snap.document(), workspace.Options{
		Rules: rules.RunOptions{Today: s.o.today()},
		Depth: depth, Jobs: s.jobs(depth), Study: workspace.Study{Sensitivities: depth == analysis.Full},
	})
}

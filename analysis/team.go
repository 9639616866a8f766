package analysis

import (
	"context"
	"fmt"
	"runtime"
	"runtime/debug"
	"sync"
	"sync/atomic"
)

// team runs numbered units of work on workers of its own. A unit's result must depend on its number alone, so that the number of
// workers changes nothing.
type team struct {
	ctx     context.Context
	workers []*worker
}

func newTeam(ctx context.Context, d *Design, jobs int) (*team, error) {
	if jobs < 1 {
		jobs = runtime.GOMAXPROCS(0)
	}
	t := &team{ctx: ctx}
	for range jobs {
		w, err := newWorker(d)
		if err != nil {
			return nil, err
		}
		w.meter.StopWhen(func() bool { return ctx.Err() != nil })
		t.workers = append(t.workers, w)
	}
	return t, nil
}

// run does all units and returns the error of the lowest unit that has one.
func (t *team) run(units int, do func(w *worker, unit int) error) error {
	errs := make([]error, units)
	if len(t.workers) == 1 || units == 1 {
		for unit := range units {
			if errs[unit] = t.one(t.workers[0], unit, do); errs[unit] != nil {
				return errs[unit]
			}
		}
		return nil
	}
	var next atomic.Int64
	var all sync.WaitGroup
	for _, w := range t.workers[:min(len(t.workers), units)] {
		all.Add(1)
		go func() {
			defer all.Done()
			for {
				unit := int(next.Add(1)) - 1
				if unit >= units {
					return
				}
				errs[unit] = t.one(w, unit, do)
			}
		}()
	}
	all.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}

func (t *team) one(w *worker, unit int, do func(*worker, int) error) (err error) {
	defer func() {
		if cause := recover(); cause != nil {
			err = &Fault{Cause: cause, Stack: debug.Stack()}
		}
	}()
	if err := t.ctx.Err(); err != nil {
		return err
	}
	return do(w, unit)
}

// Fault is a defect of the program: a panic inside an analysis, carried from the goroutine that it happened in.
type Fault struct {
	Cause any
	Stack []byte
}

func (f *Fault) Error() string { return fmt.Sprint(f.Cause) }

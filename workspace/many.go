package workspace

import (
	"context"
	"runtime"
	"sync"
)

// lookAhead is how many finished files per worker may wait for an earlier one: enough that one slow file does not stop the
// others, little enough that memory stays flat over any number of files.
const lookAhead = 8

// CheckAll checks the files with the given number of jobs. done, which may be nil, is called once for each file, in the
// order of the paths, as soon as that file and all before it are finished; the files are returned in the same order.
func (w *Workspace) CheckAll(ctx context.Context, paths []string, o Options, done func(File)) []File {
	items := make([]Item, len(paths))
	for i, p := range paths {
		items[i] = Item{Path: p, In: w}
	}
	files := make([]File, 0, len(paths))
	Each(ctx, items, o, func(f File) {
		files = append(files, f)
		if done != nil {
			done(f)
		}
	})
	return files
}

// Each checks the items and hands each outcome to done, one after another, in the order of the items. It keeps nothing, so
// a shelf of any size runs in the memory of a few files. It returns early, between two files, when ctx is cancelled.
func Each(ctx context.Context, items []Item, o Options, done func(File)) {
	jobs := o.Jobs
	if jobs <= 0 {
		jobs = runtime.GOMAXPROCS(0)
	}
	workers := max(1, min(jobs, len(items)))
	o.Jobs = max(1, jobs/workers)

	type ticket struct {
		item Item
		out  chan File
	}
	queue := make(chan ticket)
	order := make(chan ticket, workers*lookAhead)
	var running sync.WaitGroup
	for range workers {
		running.Go(func() {
			for t := range queue {
				t.out <- t.item.In.CheckFile(ctx, t.item.Path, o)
			}
		})
	}
	go func() {
		defer close(order)
		defer close(queue)
		for _, item := range items {
			if ctx.Err() != nil {
				return
			}
			t := ticket{item, make(chan File, 1)}
			order <- t
			queue <- t
		}
	}()
	for t := range order {
		done(<-t.out)
	}
	running.Wait()
}

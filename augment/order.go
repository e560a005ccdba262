package augment

import (
	"context"
	"iter"
	"sync"
)

// ordered applies f to each item on several goroutines and yields the results
// in the order of the items. At most 2·workers items are under way or waiting
// at any time. An error among the items, or the end of ctx, is yielded once,
// after the results of the items before it, and ends the sequence. When the
// receiver stops early the item sequence is ended too, before ordered returns.
func ordered[T, R any](ctx context.Context, items func(yield func(T, error) bool), workers int, f func(T) R) iter.Seq2[R, error] {
	type task struct {
		item   T
		err    error
		result chan R
	}
	return func(yield func(R, error) bool) {
		inner, cancel := context.WithCancel(ctx)
		todo := make(chan task)
		queue := make(chan task, workers) // in order, waiting for their results
		var running sync.WaitGroup
		defer running.Wait()
		defer cancel()

		running.Go(func() {
			defer close(queue)
			defer close(todo)
			for item, err := range items {
				t := task{item: item, err: err, result: make(chan R, 1)}
				select {
				case queue <- t:
				case <-inner.Done():
					return
				}
				if err != nil {
					return
				}
				select {
				case todo <- t:
				case <-inner.Done():
					return
				}
			}
		})
		for range workers {
			running.Go(func() {
				for t := range todo {
					t.result <- f(t.item)
				}
			})
		}

		var none R
		for t := range queue {
			if t.err != nil {
				yield(none, t.err)
				return
			}
			select {
			case r := <-t.result:
				if !yield(r, nil) {
					return
				}
			case <-inner.Done():
				yield(none, ctx.Err())
				return
			}
		}
		if ctx.Err() != nil {
			yield(none, ctx.Err())
		}
	}
}

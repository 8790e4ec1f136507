package spectra

import (
	"sync"
	"sync/atomic"
)

// Workers are goroutines that share out the items of one loop after another. Which worker does
// which item is left to chance, so an item's result must not depend on it.
//
// Each serves one goroutine at a time.
type Workers struct {
	start []chan struct{} // one a worker
	done  sync.WaitGroup
	ended sync.WaitGroup

	do    func(worker, item int)
	items int64
	next  atomic.Int64
}

// NewWorkers starts n workers, at least one. Close ends them.
func NewWorkers(n int) *Workers {
	w := &Workers{start: make([]chan struct{}, max(n, 1))}
	for i := range w.start {
		w.start[i] = make(chan struct{}, 1)
		w.ended.Add(1)
		go w.run(i)
	}
	return w
}

// Len is the number of workers.
func (w *Workers) Len() int { return len(w.start) }

// Each calls do(worker, item) for every item from 0 to items-1, on all workers at once, and returns
// when all is done. A do that is made once and kept costs no allocation.
func (w *Workers) Each(items int, do func(worker, item int)) {
	w.do, w.items = do, int64(items)
	w.next.Store(0)
	w.done.Add(len(w.start))
	for _, start := range w.start {
		start <- struct{}{}
	}
	w.done.Wait()
}

// Close ends the workers and waits for them.
func (w *Workers) Close() {
	for _, start := range w.start {
		close(start)
	}
	w.ended.Wait()
}

func (w *Workers) run(worker int) {
	defer w.ended.Done()
	for range w.start[worker] {
		for {
			item := w.next.Add(1) - 1
			if item >= w.items {
				break
			}
			w.do(worker, int(item))
		}
		w.done.Done()
	}
}

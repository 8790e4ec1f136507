package record

import (
	"math"
	"time"
)

// run writes what is in the queue until that is closed or the file breaks.
func (r *Recorder) run(refresh time.Duration) {
	defer close(r.done)
	ticker := time.NewTicker(refresh)
	defer ticker.Stop()
	for {
		p, closed := r.queue.next(r.gap)
		var err error
		switch {
		case len(p.frames) > 0:
			err = r.write(p, ticker.C)
		case closed:
			r.finish(nil)
			return
		default:
			err = r.wait(ticker.C)
		}
		if err != nil {
			r.finish(err)
			return
		}
	}
}

// write writes a piece, and refreshes the header when that is due.
func (r *Recorder) write(p piece, due <-chan time.Time) error {
	if err := r.file.Write(p.frames); err != nil {
		return err
	}
	r.frames.Add(r.queue.done(p))
	select {
	case <-due:
		return r.refresh()
	default:
		return nil
	}
}

// wait returns when there may be something to do, or after a refresh.
func (r *Recorder) wait(due <-chan time.Time) error {
	select {
	case <-r.queue.wake:
		return nil
	case <-due:
		return r.refresh()
	}
}

// refresh makes the header count all frames written.
func (r *Recorder) refresh() error {
	frames := r.frames.Load()
	if frames == r.refreshed {
		return nil
	}
	r.refreshed = frames
	return r.file.RefreshHeader()
}

// finish closes the queue and the file and reports what went wrong: broken, which the file gave, with
// what closing it found, or what the queue was closed for.
func (r *Recorder) finish(broken error) {
	reason := r.queue.close(broken)
	r.queue.abandon()
	closing := r.file.Close()
	// The first error of a wav.Writer comes again when it is closed, with what became of the file.
	for _, err := range []error{closing, broken, reason} {
		if err == nil {
			continue
		}
		r.err.Store(&err)
		if r.onError != nil {
			r.onError(err)
		}
		return
	}
}

// lostFrames is a piece of frames without samples.
func lostFrames(channels int) []float64 {
	frames := make([]float64, max(1, pieceBytes/(bytesPerSample*channels))*channels)
	for i := range frames {
		frames[i] = math.NaN()
	}
	return frames
}

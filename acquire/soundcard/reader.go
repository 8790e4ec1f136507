package soundcard

import (
	"context"
	"time"
)

// A reader is the one goroutine that calls the functions of a card. They can hang for good, as a
// sound server's do that was killed at a bad moment; then the reader hangs, and nobody else. It
// does not keep the program from ending.
type reader struct {
	card     card
	channels int
	least    int // frames to wait for before a read
	ask      chan []float32
	answers  chan answer
	released chan struct{} // closed when the card was given back
	broken   error         // what came of giving it back; to be read when released is closed
	timer    *time.Timer
}

// An answer says what was read into what was asked for.
type answer struct {
	frames   int // at least 1 unless err is not nil
	queued   int // frames that the card still had in store
	at       time.Time
	overflow bool // frames were lost before the end of these
	err      error
}

// lookInterval is the longest time between two looks for frames. What a gap is taken for too long or too
// short is of this order; a look costs some microseconds.
const lookInterval = 5 * time.Millisecond

func newReader(c card, rateHz float64, channels int) *reader {
	return &reader{
		card: c, channels: channels, least: max(1, int(rateHz/readsPerSecond)),
		ask:      make(chan []float32),
		answers:  make(chan answer, 1), // nobody may be there to take it
		released: make(chan struct{}),
		timer:    time.NewTimer(0),
	}
}

// run answers until ctx ends, then gives the card back.
func (r *reader) run(ctx context.Context) {
	overflow := false
	for {
		select {
		case dst := <-r.ask:
			a := r.read(ctx, dst)
			a.overflow = a.overflow || overflow
			if a.err == nil {
				a.queued, overflow, a.err = r.card.available()
			}
			a.at = time.Now() // last, so that being held up looks like being late, never early
			r.answers <- a
		case <-ctx.Done():
			r.timer.Stop()
			r.broken = r.card.release()
			close(r.released)
			return
		}
	}
}

// read waits for frames and reads all there are, as far as they fit. What a sound server has handed
// over in part only is what it hangs on when it is killed.
func (r *reader) read(ctx context.Context, dst []float32) (a answer) {
	for ctx.Err() == nil {
		n, overflow, err := r.card.available()
		a.overflow = a.overflow || overflow
		if err != nil {
			a.err = err
			return a
		}
		if fit := len(dst) / r.channels; n >= min(r.least, fit) {
			a.frames = min(n, fit)
			overflow, a.err = r.card.read(dst[:a.frames*r.channels])
			a.overflow = a.overflow || overflow
			if a.err != nil {
				a.frames = 0
			}
			return a
		}
		r.timer.Reset(lookInterval)
		select {
		case <-r.timer.C:
		case <-ctx.Done():
		}
	}
	a.err = context.Cause(ctx)
	return a
}

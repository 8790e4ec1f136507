package soundcard

import (
	"context"
	"errors"
	"time"
)

// A fakeCard captures by the clock of the test. Its samples tell where they belong: channel c of
// frame i is i + c/16, which a float32 holds exactly for 2^19 frames.
type fakeCard struct {
	rateHz   float64 // its own, which may differ from the one it was opened with
	channels int
	losses   []fakeLoss // rising; they do not touch
	visible  int        // available says no more than this; 0 for no limit

	breaks time.Duration // after so long it gives nothing; 0 for never
	fails  error         // what it says then; nil for nothing
	hangs  chan struct{} // then it does not even answer until this is closed; nil if it does
	torn   bool          // or it breaks in the middle of a read
	slow   time.Duration // what release takes

	start    time.Time
	next     int64 // to be read
	released int
}

// A fakeLoss says that frames were captured and never to be had.
type fakeLoss struct {
	first, frames int64
	declared      bool
}

func newFakeCard(rateHz float64, channels int, losses ...fakeLoss) *fakeCard {
	return &fakeCard{rateHz: rateHz, channels: channels, losses: losses, start: time.Now()}
}

func (f *fakeCard) available() (int, bool, error) {
	now := time.Since(f.start)
	if f.breaks > 0 && now >= f.breaks && !f.torn {
		if f.hangs != nil {
			<-f.hangs
		}
		return 0, false, f.fails
	}
	captured := int64(now.Seconds() * f.rateHz)
	n := captured - f.next
	for _, loss := range f.losses {
		n -= max(0, min(captured, loss.first+loss.frames)-loss.first)
	}
	if f.visible > 0 {
		n = min(n, int64(f.visible))
	}
	return int(n), false, nil
}

func (f *fakeCard) read(dst []float32) (overflow bool, err error) {
	if f.torn && time.Since(f.start) >= f.breaks {
		return false, f.fails
	}
	for i := 0; i < len(dst); i += f.channels {
		if len(f.losses) > 0 && f.next == f.losses[0].first {
			f.next += f.losses[0].frames
			overflow = overflow || f.losses[0].declared
			f.losses = f.losses[1:]
		}
		for c := range f.channels {
			dst[i+c] = float32(f.next) + float32(c)/16
		}
		f.next++
	}
	return overflow, nil
}

func (f *fakeCard) release() error {
	time.Sleep(f.slow)
	f.released++
	return nil
}

var errFake = errors.New("cable bitten")

func fakeSource(ctx context.Context, f *fakeCard, rateHz float64) *Source {
	return newSource(ctx, f, "Fake: card", rateHz, f.channels)
}

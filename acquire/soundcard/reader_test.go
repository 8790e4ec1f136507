package soundcard

import (
	"context"
	"testing"
	"testing/synctest"
	"time"
)

// A reader leaves nothing where it is that fits, and does not wait for more than fits.
func TestReaderTakesWhatFits(t *testing.T) {
	for _, c := range []struct {
		name           string
		late           time.Duration // after which it is asked
		room           int           // frames
		frames, queued int
		waits          time.Duration
	}{
		{"all there is", 100 * time.Millisecond, 1000, 800, 0, 0},
		{"as much as fits", 100 * time.Millisecond, 300, 300, 500, 0},
		{"once enough is there", 0, 1000, fakeRateHz / readsPerSecond, 0, time.Second / readsPerSecond},
		{"once it is full", 0, 40, 40, 0, lookInterval},
	} {
		t.Run(c.name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				ctx, cancel := context.WithCancel(t.Context())
				r := newReader(newFakeCard(fakeRateHz, fakeChannels), fakeRateHz, fakeChannels)
				go r.run(ctx)
				time.Sleep(c.late)
				asked := time.Now()
				r.ask <- make([]float32, c.room*fakeChannels)
				a := <-r.answers
				if a.err != nil || a.frames != c.frames || a.queued != c.queued || a.at.Sub(asked) != c.waits {
					t.Errorf("%+v after %v", a, a.at.Sub(asked))
				}
				cancel()
				<-r.released
			})
		})
	}
}

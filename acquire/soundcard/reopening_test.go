package soundcard

import (
	"context"
	"errors"
	"io"
	"testing"
	"testing/synctest"
	"time"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
)

var _ acquire.Source = (*Reopening)(nil)

// fakeRelease is what it takes to give a card back.
const fakeRelease = 500 * time.Millisecond

var errAway = errors.New("no such device")

// A fakePort is where a device is plugged in and pulled out. Frames are numbered by the clock from the
// making of the port on, whichever card captures them.
type fakePort struct {
	start time.Time
	away  [][2]time.Duration // from, until
	tries []time.Duration    // when it was tried to open
	slow  time.Duration      // what opening takes
	cards []*fakeCard
}

func (p *fakePort) open(ctx context.Context) (*Source, error) {
	now := time.Since(p.start)
	p.tries = append(p.tries, now)
	for _, card := range p.cards {
		if card.released == 0 {
			return nil, errors.New("it is not given back yet")
		}
	}
	time.Sleep(p.slow)
	card := newFakeCard(fakeRateHz, fakeChannels)
	card.slow = fakeRelease
	card.start = p.start
	card.next = int64(time.Since(p.start).Seconds() * fakeRateHz)
	for _, away := range p.away {
		if now >= away[0] && now < away[1] {
			return nil, errAway
		}
		if now < away[0] && card.breaks == 0 {
			card.breaks, card.fails = away[0], errFake
		}
	}
	p.cards = append(p.cards, card)
	return fakeSource(ctx, card, fakeRateHz), nil
}

func TestReopeningReportsTheTimeAway(t *testing.T) {
	for _, c := range []struct {
		name  string
		away  [][2]time.Duration
		slow  time.Duration
		tries int // to open it again, the ones that succeed included
	}{
		{"never", nil, 0, 0},
		{"for a moment", [][2]time.Duration{{2 * time.Second, 2 * time.Second}}, 0, 1},
		{"for ten seconds", [][2]time.Duration{{2 * time.Second, 12 * time.Second}}, 0, 11},
		{"for an hour", [][2]time.Duration{{2 * time.Second, time.Hour}}, 0, 3599},
		{"twice", [][2]time.Duration{{2 * time.Second, 4500 * time.Millisecond}, {8 * time.Second, 9500 * time.Millisecond}}, 0, 5},
		{"opening takes long", [][2]time.Duration{{12 * time.Second, 20 * time.Second}}, 3 * time.Second, 3},
	} {
		t.Run(c.name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				p := &fakePort{start: time.Now(), away: c.away, slow: c.slow}
				s, err := reopening(t.Context(), fakeRateHz, fakeChannels, nil, p.open)
				if err != nil {
					t.Fatal(err)
				}
				end := 20 * time.Second
				if len(c.away) > 0 {
					end += c.away[len(c.away)-1][1]
				}
				closed := make(chan struct{})
				time.AfterFunc(end, func() {
					s.Close()
					close(closed)
				})
				stretches, err := sourcetest.Drain(t, s, 1000)
				if err != io.EOF {
					t.Errorf("ended with %v", err)
				}
				<-closed
				checkStretches(t, stretches, len(c.away))
				if len(p.tries)-1 != c.tries {
					t.Errorf("%d tries, want %d: %v", len(p.tries)-1, c.tries, p.tries)
				}
				synctest.Wait()
				for i, card := range p.cards {
					if card.released != 1 {
						t.Errorf("card %d was given back %d times", i, card.released)
					}
				}
			})
		})
	}
}

// checkStretches wants so many gaps, each as long as what is missing.
func checkStretches(t *testing.T, stretches []sourcetest.Stretch, gaps int) {
	t.Helper()
	if len(stretches) != 2*gaps+1 {
		t.Fatalf("%d stretches, want %d gaps", len(stretches), gaps)
	}
	place, first := int64(0), int64(stretches[0].Samples[0])
	for i, stretch := range stretches {
		if (stretch.Lost > 0) != (i%2 == 1) {
			t.Fatalf("stretch %d is %d lost frames", i, stretch.Lost)
		}
		place += stretch.Lost
		if stretch.Lost > 0 {
			continue
		}
		if off := int64(stretch.Samples[0]) - first - place; abs(off) > sizeTolerance {
			t.Errorf("stretch %d is %d frames off", i, off)
		}
		place += int64(len(stretch.Samples) / fakeChannels)
	}
}

// A device that opens but gives nothing is not back.
func TestReopeningWaitsForFrames(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		start := time.Now()
		opened := 0
		var cards []*fakeCard
		open := func(ctx context.Context) (*Source, error) {
			opened++
			if opened > 1 && cards[opened-2].released == 0 {
				t.Error("opened while the last one is not given back")
			}
			card := newFakeCard(fakeRateHz, fakeChannels)
			card.slow = retryInterval + fakeRelease
			cards = append(cards, card)
			switch opened {
			case 1:
				card.breaks = time.Second
			case 2, 3:
				card.breaks = time.Nanosecond
			}
			return fakeSource(ctx, card, fakeRateHz), nil
		}
		s, err := reopening(t.Context(), fakeRateHz, fakeChannels, nil, open)
		if err != nil {
			t.Fatal(err)
		}
		defer s.Close()
		dst := make([]float64, 100*fakeChannels)
		var gap *acquire.GapError
		for err = nil; err == nil; {
			_, err = s.Read(dst)
		}
		if !errors.As(err, &gap) || opened != 4 {
			t.Fatalf("%v after opening %d times", err, opened)
		}
		away := time.Since(start) - time.Second
		if want := int64(away.Seconds() * fakeRateHz); abs(gap.Frames-want) > sizeTolerance+fakeRateHz/readsPerSecond {
			t.Errorf("gap of %d frames, it was away for %d", gap.Frames, want)
		}
	})
}

func TestReopeningEnds(t *testing.T) {
	why := errors.New("enough")
	for _, c := range []struct {
		name string
		at   time.Duration
		slow time.Duration // the device is away from 2 s on
	}{
		{"while frames come", time.Second, 0},
		{"while it is not noticed yet that the device is lost", 2 * time.Second, 0},
		{"while waiting", 5500 * time.Millisecond, 0},
		{"while trying", 15 * time.Second, 10 * time.Second},
	} {
		for _, closes := range []bool{false, true} {
			name := c.name + ", by its context"
			if closes {
				name = c.name + ", by Close"
			}
			t.Run(name, func(t *testing.T) {
				synctest.Test(t, func(t *testing.T) {
					ctx, cancel := context.WithCancelCause(t.Context())
					p := &fakePort{start: time.Now(), away: [][2]time.Duration{{2*time.Second + c.slow, time.Hour}}, slow: c.slow}
					s, err := reopening(ctx, fakeRateHz, fakeChannels, nil, p.open)
					if err != nil {
						t.Fatal(err)
					}
					start := time.Now()
					time.AfterFunc(c.at, func() {
						if closes {
							s.Close()
						} else {
							cancel(why)
						}
					})
					_, err = sourcetest.Drain(t, s, 1000)
					if closes && err != io.EOF || !closes && err != why {
						t.Errorf("ended with %v", err)
					}
					if late := time.Since(start) - c.at; late > fakeRelease+lookInterval {
						t.Errorf("ended after %v", late)
					}
					if err := s.Close(); err != nil {
						t.Error(err)
					}
					time.Sleep(2 * c.slow) // a try that was on its way comes back
					synctest.Wait()
					for i, card := range p.cards {
						if card.released != 1 {
							t.Errorf("card %d was given back %d times", i, card.released)
						}
					}
				})
			})
		}
	}
}

// The gap reaches from the last frame of the old device to the first of the new one, wherever they
// were when it was noticed.
func TestBetween(t *testing.T) {
	at := time.Now()
	for _, c := range []struct {
		name      string
		old, next Source
		want      int64
	}{
		{"nothing in store", Source{start: at, last: at}, Source{last: at.Add(10 * time.Second), held: held{free: 100}}, 9900},
		{"in store on both sides", Source{start: at, last: at, queued: 500}, Source{last: at.Add(10 * time.Second), queued: 30, held: held{free: 100}}, 10370},
		{"nothing ever came", Source{start: at}, Source{last: at.Add(time.Second), held: held{free: 100}}, 900},
		{"back at once", Source{start: at, last: at}, Source{last: at, held: held{free: 100}}, 1},
	} {
		t.Run(c.name, func(t *testing.T) {
			c.next.rateHz, c.next.channels = 1000, 1
			if got := between(&c.old, &c.next); got != c.want {
				t.Errorf("%d frames, want %d", got, c.want)
			}
		})
	}
}

func TestReopeningNeedsTheDeviceAtFirst(t *testing.T) {
	open := func(context.Context) (*Source, error) { return nil, errAway }
	if s, err := reopening(t.Context(), fakeRateHz, fakeChannels, nil, open); s != nil || err != errAway {
		t.Errorf("got %v, %v", s, err)
	}
}

package soundcard

import (
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
)

var _ acquire.Source = (*Source)(nil)

const (
	fakeRateHz   = 8000
	fakeChannels = 3
)

// sizeTolerance of a gap, in frames: a look too late at either side.
const sizeTolerance = 2 * fakeRateHz * int64(lookInterval) / int64(time.Second)

// closeAfter makes an end, so that Drain has one.
func closeAfter(t *testing.T, s *Source, d time.Duration) {
	time.AfterFunc(d, func() {
		if err := s.Close(); err != nil {
			t.Error(err)
		}
	})
}

// A gotGap is one that Drain found: its place and size by the samples around it.
type gotGap struct{ after, before, said int64 }

// gapsOf checks that every sample is in its channel and follows the one before in its stretch.
func gapsOf(t *testing.T, stretches []sourcetest.Stretch) []gotGap {
	t.Helper()
	last := int64(-1)
	said := int64(0)
	var got []gotGap
	for _, stretch := range stretches {
		if stretch.Lost > 0 {
			said = stretch.Lost
			continue
		}
		for i, v := range stretch.Samples {
			frame := int64(v)
			if v != float64(frame)+float64(i%fakeChannels)/16 {
				t.Fatalf("channel %d holds %v", i%fakeChannels+1, v)
			}
			if i%fakeChannels > 0 {
				continue
			}
			if i == 0 && said > 0 {
				got = append(got, gotGap{last, frame, said})
			} else if frame != last+1 {
				t.Fatalf("frame %d came after %d, without a gap", frame, last)
			}
			last = frame
		}
	}
	return got
}

// sure is how long it may take until a loss is known, and with it more that may be in the gap.
const sure = int64((settleTime + 2*tick) * fakeRateHz / time.Second)

// A gap covers the loss, and beside it no more than it takes to be sure. Its size is what is missing.
func TestGapsCoverLosses(t *testing.T) {
	for _, c := range []struct {
		name    string
		losses  []fakeLoss
		visible int
		want    []fakeLoss // the losses, those close together joined
	}{
		{"nothing lost", nil, 0, nil},
		{"declared", []fakeLoss{{8000, 4000, true}}, 0, []fakeLoss{{8000, 4000, true}}},
		{"declared and short", []fakeLoss{{8000, 100, true}}, 0, []fakeLoss{{8000, 100, true}}},
		{"a frame, declared", []fakeLoss{{8000, 1, true}}, 0, []fakeLoss{{8000, 1, true}}},
		{"far apart", []fakeLoss{{8000, 4000, true}, {24000, 800, true}}, 0, []fakeLoss{{8000, 4000, true}, {24000, 800, true}}},
		{"close together", []fakeLoss{{8000, 4000, true}, {13000, 800, true}}, 0, []fakeLoss{{8000, 5800, true}}},
		{"not declared", []fakeLoss{{8000, 4000, false}}, 0, []fakeLoss{{8000, 4000, false}}},
		{"not declared, just long enough", []fakeLoss{{8000, 1000, false}}, 0, []fakeLoss{{8000, 1000, false}}},
		{"not declared, close together", []fakeLoss{{8000, 4000, false}, {13000, 1600, false}}, 0, []fakeLoss{{8000, 6600, false}}},
		{"not declared, then declared", []fakeLoss{{8000, 4000, false}, {13000, 1, true}}, 0, []fakeLoss{{8000, 5001, false}}},
		{"card that hides what it has", []fakeLoss{{8000, 4000, false}}, 300, []fakeLoss{{8000, 4000, false}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				card := newFakeCard(fakeRateHz, fakeChannels, c.losses...)
				card.visible = c.visible
				s := fakeSource(t.Context(), card, fakeRateHz)
				closeAfter(t, s, 5*time.Second)
				stretches, err := sourcetest.Drain(t, s, 1000)
				if err != io.EOF {
					t.Errorf("ended with %v", err)
				}
				got := gapsOf(t, stretches)
				if len(got) != len(c.want) {
					t.Fatalf("gaps %v, want %v", got, c.want)
				}
				for i, g := range got {
					first, end := c.want[i].first, c.want[i].first+c.want[i].frames
					if g.after >= first || g.after < first-sure || g.before < end || g.before > end+sure {
						t.Errorf("gap %v, want %v", g, c.want[i])
					}
					if abs(g.said-(g.before-g.after-1)) > sizeTolerance {
						t.Errorf("gap of %d frames, %d are missing", g.said, g.before-g.after-1)
					}
				}
			})
		})
	}
}

func abs(v int64) int64 { return max(v, -v) }

// A card that loses frames all the time gives gaps and never nothing for long, and the frames that it
// gives stand where they belong.
func TestLossWithoutEnd(t *testing.T) {
	for _, c := range []struct {
		name          string
		every, frames int64
		declared      bool
		off           int64 // of the place of a frame: what may be lost before it is known
		silent        time.Duration
	}{
		{"declared", 200, 50, true, 0, longestDoubt + settleTime},
		{"not declared, before the last one has settled", 2200, 900, false, 900, 2 * heldTime},
		{"not declared, bit by bit", 80, 10, false, 1000, 2 * heldTime},
	} {
		t.Run(c.name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				var losses []fakeLoss
				for at := int64(8000); at < 80000; at += c.every {
					losses = append(losses, fakeLoss{at, c.frames, c.declared})
				}
				s := fakeSource(t.Context(), newFakeCard(fakeRateHz, fakeChannels, losses...), fakeRateHz)
				defer s.Close()
				var place, gaps int64
				dst := make([]float64, 100*fakeChannels)
				for start, last := time.Now(), time.Now(); time.Since(start) < 12*time.Second; last = time.Now() {
					n, err := s.Read(dst)
					var gap *acquire.GapError
					if errors.As(err, &gap) {
						place += gap.Frames
						gaps++
					} else if err != nil {
						t.Fatal(err)
					}
					if wait := time.Since(last); wait > c.silent {
						t.Errorf("nothing came for %v", wait)
					}
					if n > 0 && abs(int64(dst[0])-place) > sizeTolerance+c.off {
						t.Fatalf("frame %v came at %d", dst[0], place)
					}
					if n > 0 && c.declared && place > 8200 && place < 79800 {
						t.Fatalf("frames came at %d, between losses", place)
					}
					place += int64(n)
				}
				if gaps < 2 {
					t.Errorf("%d gaps", gaps)
				}
			})
		})
	}
}

// What is held back because frames were lost before it does not come without the gap at the end.
func TestLostWhileALossSettles(t *testing.T) {
	for _, declared := range []bool{false, true} {
		synctest.Test(t, func(t *testing.T) {
			card := newFakeCard(fakeRateHz, fakeChannels, fakeLoss{16000, 4000, declared})
			card.breaks, card.fails = 2600*time.Millisecond, errFake
			stretches, err := sourcetest.Drain(t, fakeSource(t.Context(), card, fakeRateHz), 1000)
			if !errors.Is(err, errFake) || len(stretches) != 2 || stretches[1].Lost < 4000 {
				t.Errorf("%d stretches, then %v", len(stretches), err)
			}
			if frames := len(stretches[0].Samples) / fakeChannels; frames > 16000 {
				t.Errorf("%d frames without a gap", frames)
			}
		})
	}
}

// A reader that stays away is no loss as long as the card keeps everything, however little of it
// the card admits to.
func TestReadingLateLosesNothing(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		card := newFakeCard(fakeRateHz, fakeChannels)
		card.visible = 300
		s := fakeSource(t.Context(), card, fakeRateHz)
		dst := make([]float64, 700*fakeChannels)
		next := int64(0)
		for i := range 300 {
			if i%70 == 35 { // five times; in between there is time to catch up
				time.Sleep(2 * time.Second)
			}
			n, err := s.Read(dst)
			if err != nil || int64(dst[0]) != next {
				t.Fatalf("%d frames from %v, %v, want %d", n, dst[0], err, next)
			}
			next += int64(n)
		}
		s.Close()
	})
}

// Clocks that differ by a few parts in ten thousand lose nothing, for as long as one likes.
func TestDriftIsNoGap(t *testing.T) {
	for _, offset := range []float64{-5e-4, 5e-4} {
		synctest.Test(t, func(t *testing.T) {
			s := fakeSource(t.Context(), newFakeCard(fakeRateHz*(1+offset), fakeChannels), fakeRateHz)
			dst := make([]float64, fakeRateHz*fakeChannels)
			for range 300 { // after which the clocks are 0.15 s apart
				if n, err := s.Read(dst); n != fakeRateHz {
					t.Fatal(n, err)
				}
			}
			s.Close()
		})
	}
}

func TestDeviceIsLost(t *testing.T) {
	for _, c := range []struct {
		name   string
		breaks time.Duration
		fails  error
		hangs  bool
		torn   bool
		within time.Duration
	}{
		{"falls silent", 3 * time.Second, nil, false, false, silence + tick},
		{"was never there", time.Nanosecond, nil, false, false, firstSilence + tick},
		{"breaks", 3 * time.Second, errFake, false, false, tick},
		{"hangs", 3 * time.Second, nil, true, false, silence + tick},
		{"hangs from the first", time.Nanosecond, nil, true, false, firstSilence + tick},
		{"breaks in the middle", 3 * time.Second, errFake, false, true, tick},
	} {
		t.Run(c.name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				card := newFakeCard(fakeRateHz, fakeChannels)
				card.breaks, card.fails, card.torn = c.breaks, c.fails, c.torn
				if c.hangs {
					card.hangs = make(chan struct{})
				}
				s := fakeSource(t.Context(), card, fakeRateHz)
				stretches, err := sourcetest.Drain(t, s, 1000)
				if !errors.Is(err, ErrLost) || c.fails != nil && !errors.Is(err, c.fails) {
					t.Errorf("ended with %v", err)
				}
				if late := time.Since(card.start) - c.breaks; late > c.within || c.fails == nil && late < c.within-2*tick {
					t.Errorf("found out after %v", late)
				}
				if got := gapsOf(t, stretches); len(got) > 0 {
					t.Errorf("gaps %v", got)
				}
				frames := 0
				for _, stretch := range stretches {
					frames += len(stretch.Samples) / fakeChannels
				}
				if want := c.breaks.Seconds() * fakeRateHz; math.Abs(float64(frames)-want) > float64(sizeTolerance)+fakeRateHz/readsPerSecond {
					t.Errorf("%d frames came before, want %v", frames, want)
				}
				if said := fmt.Sprintf("after frame %d:", frames); !strings.Contains(err.Error(), said) {
					t.Errorf("%v: want %s", err, said)
				}
				closing := time.Now()
				err = s.Close()
				if (err != nil) != c.hangs || time.Since(closing) > releaseTime {
					t.Errorf("Close gave %v after %v", err, time.Since(closing))
				}
				if c.hangs {
					close(card.hangs)
				}
				synctest.Wait()
				if card.released != 1 {
					t.Errorf("the card was given back %d times", card.released)
				}
			})
		})
	}
}

func TestCloseEndsAWaitingRead(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		card := newFakeCard(fakeRateHz, fakeChannels)
		s := fakeSource(t.Context(), card, fakeRateHz)
		closeAfter(t, s, time.Second)
		n, err := s.Read(make([]float64, 2*fakeRateHz*fakeChannels)) // two seconds of frames
		if err != nil || n < fakeRateHz*9/10 || time.Since(card.start) > time.Second+lookInterval {
			t.Errorf("%d frames, %v after %v", n, err, time.Since(card.start))
		}
		if n, err := s.Read(make([]float64, fakeChannels)); n != 0 || err != io.EOF {
			t.Errorf("%d frames, %v", n, err)
		}
		if err := s.Close(); err != nil || card.released != 1 {
			t.Errorf("Close gave %v, the card was given back %d times", err, card.released)
		}
	})
}

func TestReadPanics(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		s := fakeSource(t.Context(), newFakeCard(fakeRateHz, fakeChannels), fakeRateHz)
		defer s.Close()
		for _, length := range []int{0, 1, fakeChannels + 1} {
			func() {
				defer func() {
					if recover() == nil {
						t.Errorf("no panic at %d samples", length)
					}
				}()
				s.Read(make([]float64, length))
			}()
		}
	})
}

func TestSourceAllocatesNothing(t *testing.T) {
	const rateHz = 192000 // so that it does not take long
	s := fakeSource(t.Context(), newFakeCard(rateHz, fakeChannels), rateHz)
	defer s.Close()
	dst := make([]float64, rateHz/readsPerSecond*fakeChannels)
	read := func() {
		if n, err := s.Read(dst); n == 0 {
			t.Fatal(err)
		}
	}
	read()
	if n := testing.AllocsPerRun(20, read); n != 0 {
		t.Errorf("%v allocations a Read", n)
	}
}

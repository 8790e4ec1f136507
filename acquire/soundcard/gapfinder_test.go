package soundcard

import (
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"pgregory.net/rapid"
)

// A story of a gapFinder at 1000 frames/s: each line says what was read when, and what is found.
func TestGapFinderTells(t *testing.T) {
	const all = -1 // hold: all that were held before and the new ones
	type line struct {
		atMS, frames, queued int
		overflow             bool
		want                 finding
	}
	// Frames come every 60 ms, 500 ms after they were captured.
	begin := []line{{560, 60, 0, false, finding{}}, {620, 60, 0, false, finding{}}, {680, 60, 0, false, finding{}}}
	for _, c := range []struct {
		name  string
		lines []line
	}{
		{"late by just too little to be missed", []line{{840, 60, 0, false, finding{}}, {860, 120, 0, false, finding{}}}},
		{"late, but there", []line{{900, 60, 160, false, finding{}}, {900, 160, 0, false, finding{}}}},
		{"late, and nobody admits that more is there", []line{
			{900, 60, 0, false, finding{hold: all}},
			{901, 60, 0, false, finding{hold: all}},
			{902, 60, 0, false, finding{}},
		}},
		{"very late, and nobody admits that more is there", []line{
			{2740, 400, 0, false, finding{hold: all}},
			{2741, 400, 0, false, finding{hold: all}},
			{2742, 400, 0, false, finding{hold: 1000}},
			{2743, 400, 0, false, finding{hold: 1000}},
			{2744, 464, 0, false, finding{}},
		}},
		{"lost", []line{
			{900, 60, 0, false, finding{hold: all}}, // 160 missing
			{960, 60, 0, false, finding{hold: all}},
			{1019, 60, 0, false, finding{hold: all}}, // 159 missing
			{1080, 60, 0, false, finding{hold: all}},
			{1140, 60, 0, false, finding{hold: all}},
			{1199, 60, 0, false, finding{hold: all}},
			{1200, 1, 0, false, finding{drop: true, lost: 159 + 360}}, // 300 ms after the first
			{1259, 59, 0, false, finding{}},
		}},
		{"lost, said the device", []line{
			{740, 60, 0, true, finding{drop: true, hold: 60}},
			{800, 60, 0, false, finding{drop: true, hold: 60}},
			{1039, 239, 0, false, finding{drop: true, hold: 239}},
			{1040, 1, 0, false, finding{drop: true, lost: 359}}, // nothing is missing but what was dropped
			{1100, 60, 0, false, finding{}},
		}},
		{"lost, said the device, though not a frame is missing", []line{
			{1040, 360, 0, true, finding{drop: true, hold: 360}},
			{1350, 310, 0, false, finding{drop: true, lost: 360}},
		}},
		{"lost, said the device, which then is early", []line{
			{690, 10, 0, true, finding{drop: true, hold: 10}},
			{990, 320, 0, false, finding{drop: true, lost: 1}}, // 10 dropped, 20 more than the clock wants
			{1050, 60, 0, false, finding{}},
		}},
		{"lost while a loss settles", []line{
			{900, 60, 0, false, finding{hold: all}},  // 160 missing
			{1120, 60, 0, false, finding{hold: all}}, // 320 missing
			{1220, 100, 0, false, finding{hold: all}},
			{1420, 200, 0, false, finding{drop: true, lost: 320 + 220}},
		}},
		{"lost without end", []line{
			{740, 60, 0, true, finding{drop: true, hold: 60}},
			{1200, 260, 0, true, finding{drop: true, hold: 260}},            // 200 missing
			{1640, 400, 0, true, finding{drop: true, lost: 560, hold: 400}}, // 240 missing, 320 dropped, 900 ms
			{1700, 60, 0, false, finding{drop: true, hold: 60}},
			{1940, 240, 0, false, finding{drop: true, lost: 460}},
			{2000, 60, 0, false, finding{}},
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			g := gapFinder{rateHz: 1000}
			held := 0
			for _, l := range append(begin[:3:3], c.lines...) {
				got := g.observe(time.Duration(l.atMS)*time.Millisecond, l.frames, l.queued, held, l.overflow)
				if l.want.hold == all {
					l.want.hold = held + l.frames
				}
				if got != l.want {
					t.Fatalf("at %d ms: %+v, want %+v", l.atMS, got, l.want)
				}
				if got.drop {
					held = 0
				}
				held = min(held+l.frames, got.hold)
			}
		})
	}
}

// A simReader reads a device that loses frames, as a Source does, and keeps the true number of each
// frame.
type simReader struct {
	gaps     gapFinder
	captured []int64 // in the device, not lost
	held     []int64
	out      []int64 // handed out; a gap is that many -1
}

func (s *simReader) read(at time.Duration, n, queued int, overflow bool) {
	f := s.gaps.observe(at, n, queued, len(s.held), overflow)
	if f.drop {
		s.held = s.held[:0]
	}
	s.held = append(s.held, s.captured[:n]...)
	s.captured = s.captured[n:]
	for range f.lost {
		s.out = append(s.out, -1)
	}
	free := max(0, len(s.held)-f.hold)
	s.out = append(s.out, s.held[:free]...)
	s.held = s.held[free:]
}

// Whatever a device loses, declared or not, and however late it is read: every frame that is handed
// out stands where the clock wants it. The clocks may differ, and frames may come in pieces.
func TestFramesStayOnTheGrid(t *testing.T) {
	const (
		rateHz        = 1000
		longestPiece  = 70
		longestLookMS = 20
	)
	rapid.Check(t, func(t *rapid.T) {
		offset := rapid.Float64Range(-2e-4, 2e-4).Draw(t, "offset of the clocks")
		piece := rapid.IntRange(1, longestPiece).Draw(t, "piece")
		hides := rapid.Bool().Draw(t, "device hides what it has")
		declares := rapid.Bool().Draw(t, "device declares losses")
		s := simReader{gaps: gapFinder{rateHz: rateHz}}
		var made, lostUntil int64                 // frames made by the device; up to which they are lost
		var unsaid []int64                        // frames behind losses that the device is going to declare
		var now, latest, quietUntil time.Duration // latest: when a reader that is held up comes back
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "what happens when"), 1))
		losses, gaps := 0, 0
		for i := range 2000 { // 20 s
			now += time.Duration(1+rng.IntN(longestLookMS)) * time.Millisecond
			event := rng.IntN(200)
			switch {
			case i < 20: // it has to be seen first how late frames come
			case !declares && now < quietUntil: // what nobody declares can be found only by itself
			case event == 0: // longer than the tolerance, or nobody would know
				frames := longestPiece + 120 + rng.IntN(800)
				losses++
				lostUntil = max(lostUntil, made+int64(frames))
				if declares {
					unsaid = append(unsaid, lostUntil)
				}
				quietUntil = now + time.Duration(frames)*time.Millisecond + settleTime + time.Second
			case event == 1:
				latest = now + time.Duration(10+rng.IntN(1500))*time.Millisecond
				quietUntil = latest + settleTime + time.Second
			}
			for end := int64(now.Seconds() * rateHz * (1 + offset)); made+int64(piece) <= end; made += int64(piece) {
				for i := range int64(piece) {
					if made+i >= lostUntil {
						s.captured = append(s.captured, made+i)
					}
				}
			}
			if now < latest || len(s.captured) == 0 {
				continue
			}
			n, queued := len(s.captured), 0
			if hides {
				n = min(n, 100)
			} else if n > 50 {
				n, queued = n/2, n-n/2
			}
			overflow := false // the device says so with the first read that reaches behind the loss
			for len(unsaid) > 0 && unsaid[0] <= s.captured[n-1] {
				overflow = true
				unsaid = unsaid[1:]
			}
			s.read(now, n, queued, overflow)
		}
		first := s.first()
		for i, frame := range s.out {
			off := math.Abs(float64(frame) - float64(first) - float64(i))
			if frame >= 0 && off > rateHz*tolerance.Seconds()+longestPiece+longestLookMS {
				t.Fatalf("frame %d stands at %d", frame-first, i)
			}
			if frame < 0 && s.out[i-1] >= 0 {
				gaps++
			}
		}
		if gaps > losses {
			t.Fatalf("%d gaps, %d losses", gaps, losses)
		}
	})
}

func (s *simReader) first() int64 {
	if len(s.out) == 0 {
		return 0
	}
	return s.out[0]
}

// What is lost bit by bit without a word is reported in the end.
func TestSmallLossesAddUp(t *testing.T) {
	g := gapFinder{rateHz: 1000}
	var lost int64
	counted := 0
	for i := range 200 { // of 100 ms, of each of which 2 % are lost
		f := g.observe(time.Duration(i)*100*time.Millisecond, 98, 0, 0, false)
		lost += f.lost
		counted += 98
	}
	if missing := int64(200*100 - counted); lost < missing-150 || lost > missing {
		t.Errorf("%d frames reported of %d", lost, missing)
	}
}

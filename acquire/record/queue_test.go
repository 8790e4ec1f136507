package record

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// pull takes one piece and returns a copy of its samples.
func pull(q *queue, gap []float64) []float64 {
	p, _ := q.next(gap)
	samples := slices.Clone(p.frames)
	q.done(p)
	return samples
}

func nan(frames int) []float64 { return slices.Repeat([]float64{math.NaN()}, frames) }

// Whatever comes and is taken in whatever order: everything has its place, in what is written a
// frame is the one of that number or lost, and those that the source gave and that are lost are
// counted as dropped.
func TestQueueKeepsPositions(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		channels := rapid.IntRange(1, 3).Draw(rt, "channels")
		capacity := rapid.Int64Range(1, 20).Draw(rt, "capacity")
		gap := slices.Repeat([]float64{math.NaN()}, channels*rapid.IntRange(1, 6).Draw(rt, "piece"))
		q := newQueue(channels, capacity)
		var given, written []float64
		for range rapid.IntRange(0, 80).Draw(rt, "steps") {
			switch n := rapid.Int64Range(1, 12).Draw(rt, "frames"); rapid.IntRange(0, 3).Draw(rt, "step") {
			case 0:
				q.skip(n)
				given = append(given, nan(int(n)*channels)...)
			case 1:
				frames := counting(channels, int64(len(given)/channels), n)
				q.add(frames)
				given = append(given, frames...)
			default:
				written = append(written, pull(q, gap)...)
			}
		}
		q.close(nil)
		for {
			p, closed := q.next(gap)
			if len(p.frames) == 0 {
				if !closed {
					rt.Fatal("an empty queue does not say that it is closed")
				}
				break
			}
			if len(p.frames) > len(gap) {
				rt.Fatalf("a piece of %d samples, at most %d are allowed", len(p.frames), len(gap))
			}
			written = append(written, pull(q, gap)...)
		}
		if len(written) != len(given) {
			rt.Fatalf("%d samples written of %d", len(written), len(given))
		}
		var dropped int64
		for i := range given {
			if !sameBits(written[i], given[i]) {
				if !math.IsNaN(written[i]) {
					rt.Fatalf("sample %d is %v, want %v", i, written[i], given[i])
				}
				dropped++
			}
		}
		if dropped%int64(channels) != 0 || dropped/int64(channels) != q.dropped.Load() {
			rt.Fatalf("%d samples are missing, %d frames count as dropped", dropped, q.dropped.Load())
		}
	})
}

func TestQueueDropsOnlyWhenFull(t *testing.T) {
	q := newQueue(2, 10)
	q.add(counting(2, 0, 10))
	if n := q.dropped.Load(); n != 0 {
		t.Fatalf("%d frames dropped of those that fit", n)
	}
	q.add(counting(2, 10, 3))
	if n := q.dropped.Load(); n != 3 {
		t.Fatalf("%d frames dropped, want the 3 that do not fit", n)
	}
}

// After a drop the queue takes frames again when it is half empty, not before.
func TestQueueWaitsUntilHalfEmpty(t *testing.T) {
	q := newQueue(1, 10)
	one := nan(1) // frames are taken one by one
	q.add(counting(1, 0, 11))
	var got []float64
	for at := range int64(12) { // each time one is taken, one comes
		got = append(got, pull(q, one)...)
		q.add(counting(1, 11+at, 1))
	}
	for p, _ := q.next(one); len(p.frames) > 0; p, _ = q.next(one) {
		got = append(got, pull(q, one)...)
	}
	// Frame 10 did not fit; 11 to 14 came while one to four places were free; at 15 there were five.
	equal(t, got, slices.Concat(counting(1, 0, 10), nan(5), counting(1, 15, 8)))
	if q.dropped.Load() != 5 {
		t.Errorf("%d frames count as dropped, want 5", q.dropped.Load())
	}
}

// With more losses than it has room for, the queue drops frames rather than their places.
func TestQueueOfManyLosses(t *testing.T) {
	q := newQueue(1, 4*maxLosses)
	var given []float64
	for k := range int64(2 * maxLosses) {
		q.skip(1)
		q.add(counting(1, 2*k+1, 1))
		given = append(given, math.NaN(), counting(1, 2*k+1, 1)[0])
	}
	if len(q.losses) != maxLosses || cap(q.losses) != maxLosses {
		t.Fatalf("%d losses in memory for %d, want %d", len(q.losses), cap(q.losses), maxLosses)
	}
	gap := nan(100)
	var got []float64
	for p, _ := q.next(gap); len(p.frames) > 0; p, _ = q.next(gap) {
		got = append(got, pull(q, gap)...)
	}
	// The last loss that has a place of its own is number maxLosses; from there on all is lost.
	last := 2*maxLosses - 2
	equal(t, got, append(given[:last:last], nan(len(given)-last)...))
	if want := int64(maxLosses + 1); q.dropped.Load() != want {
		t.Errorf("%d frames dropped, want %d", q.dropped.Load(), want)
	}
}

func TestQueueFrames(t *testing.T) {
	for _, c := range []struct {
		name     string
		rateHz   float64
		channels int
		want     int64
	}{
		{"ten seconds", 48000, 8, 480_000},
		{"bounded in bytes", 51200, 64, 128 << 20 / (8 * 64)},
		{"slow", 100, 4, 1 << 14},
		{"slow with a fraction", 0.5, 1, 1 << 14},
		{"as many channels as a file holds", 4096, 16383, 128 << 20 / (8 * 16383)},
		{"a frame larger than the bound", 100, 20 << 20, 1},
		{"fastest", 1 << 32, 1, 128 << 20 / 8},
	} {
		if got := queueFrames(c.rateHz, c.channels); got != c.want {
			t.Errorf("%s: %d frames, want %d", c.name, got, c.want)
		}
	}
}

package monitor

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"go.uber.org/goleak"
	"pgregory.net/rapid"

	"shakerwatch/acquire"
	"shakerwatch/acquire/decimate"
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
	"shakerwatch/web"
)

func TestMain(m *testing.M) { goleak.VerifyTestMain(m) }

// rigText is a rig of one force and two responses whose top frequency and line spacing are left
// open. The third response's channel has a limit below full scale.
const rigText = `
[source]
kind = "demo"
rate = 1000
channels = 4
[watch]
on_fault = "carry-on" # the channels are noise that has nothing to do with each other
[analysis]
max_frequency = %v
line_spacing = %v
overlap = %v
[[force]]
channel = 2
name = "S1"
point = "1"
axis = "+z"
sensitivity = 0.01
[[response]]
channel = 1
name = "A1z"
point = "1"
axis = "+z"
sensitivity = 0.02
[[response]]
channel = 4
name = "A2z"
point = "2"
axis = "+z"
sensitivity = 0.02
limit = 0.5
`

func newRig(t rapid.TB, topHz, spacingHz, overlap float64) *rig.Rig {
	t.Helper()
	r, err := rig.Parse("rig.toml", fmt.Appendf(nil, rigText, topHz, spacingHz, overlap))
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// A recorded source hands out made-up frames of four channels, in portions, with losses in between.
type recorded struct {
	frames  []float64
	portion int
	lost    []int64 // positions, each of one frame that is lost
	at      int64
	broken  error // what ends it; nil is io.EOF
	endless bool
}

const channelsThere = 4

// newRecorded makes n frames of noise below half of full scale.
func newRecorded(seed uint64, n int) *recorded {
	rng := rand.New(rand.NewPCG(seed, 1))
	s := &recorded{frames: make([]float64, n*channelsThere), portion: 1000}
	for i := range s.frames {
		s.frames[i] = 0.45 * (2*rng.Float64() - 1)
	}
	return s
}

func (s *recorded) RateHz() float64 { return 1000 }
func (s *recorded) Channels() int   { return channelsThere }

func (s *recorded) Read(dst []float64) (int, error) {
	total := int64(len(s.frames) / channelsThere)
	if s.endless && s.at == total {
		s.at = 0
	}
	if s.at == total {
		if s.broken != nil {
			return 0, s.broken
		}
		return 0, io.EOF
	}
	before := min(total, s.at+int64(min(s.portion, len(dst)/channelsThere)))
	for _, l := range s.lost {
		if l == s.at {
			s.at++
			return 0, &acquire.GapError{Frames: 1}
		}
		if l > s.at && l < before {
			before = l
		}
	}
	n := copy(dst, s.frames[s.at*channelsThere:before*channelsThere])
	s.at = before
	return n / channelsThere, nil
}

func mustRun(t rapid.TB, c Config) *Result {
	t.Helper()
	result, err := Run(context.Background(), c)
	if err != nil {
		t.Fatal(err)
	}
	return result
}

// sameBits compares what two runs estimate.
func sameBits(a, b *Result) bool {
	floats := func(x, y float64) bool { return math.Float64bits(x) == math.Float64bits(y) }
	return slices.EqualFunc(a.Snapshot.Gyy, b.Snapshot.Gyy, floats) &&
		slices.EqualFunc(a.Estimates.RandomError, b.Estimates.RandomError, floats) &&
		slices.Equal(slices.Collect(a.Snapshot.Starts.All()), slices.Collect(b.Snapshot.Starts.All()))
}

// TestBlocksSetAside compares the blocks averaged, seen and set aside with the rules as they are
// written, for losses and samples at the limit at random places, with and without decimation.
func TestBlocksSetAside(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		top := rapid.SampledFrom([]float64{390, 190, 120, 60}).Draw(t, "top") // d = 1, 2, 3, 6
		r := newRig(t, top, rapid.SampledFrom([]float64{10, 20}).Draw(t, "spacing"), rapid.SampledFrom([]float64{0, 0.5, 0.7}).Draw(t, "overlap"))
		n := rapid.IntRange(400, 3000).Draw(t, "frames")
		s := newRecorded(1, n)
		s.portion = rapid.IntRange(1, 300).Draw(t, "portion")
		somewhere := rapid.SliceOfNDistinct(rapid.Int64Range(0, int64(n-1)), 0, 4, rapid.ID[int64])
		s.lost = somewhere.Draw(t, "lost")
		slices.Sort(s.lost)
		atLimit := somewhere.Draw(t, "at limit")
		for _, at := range atLimit {
			s.frames[at*channelsThere+3] = -0.5
			s.frames[at*channelsThere+2] = 1 // in no use
		}
		got := mustRun(t, Config{Rig: r, Source: s})

		g := r.Grid
		f, d := int64(decimate.HalfLength(g.Decimation)), int64(g.Decimation)
		var want Counts
		var starts []int64
		want.Frames = int64(n)
		for i, l := range s.lost {
			if i == 0 || l != s.lost[i-1]+1 {
				want.Gaps++
			}
		}
		within := func(list []int64, from, before int64, but []int64) bool {
			return slices.ContainsFunc(list, func(at int64) bool { return at >= from && at < before && !slices.Contains(but, at) })
		}
		for k := int64(0); k*int64(g.Hop)*d+int64(g.Block)*d <= int64(n); k++ {
			start := k * int64(g.Hop) * d
			before := start + int64(g.Block)*d
			want.Seen++
			over := within(atLimit, start, before, s.lost)
			if over {
				want.Overranges++
			}
			if over || within(s.lost, start-f, before+f, nil) {
				want.SetAside++
			} else {
				want.Averaged++
				starts = append(starts, start)
			}
		}
		if got.Counts != want {
			t.Errorf("d = %d: counts %+v, want %+v", d, got.Counts, want)
		}
		if gotStarts := slices.Collect(got.Snapshot.Starts.All()); !slices.Equal(gotStarts, starts) {
			t.Errorf("d = %d: blocks %v, want %v", d, gotStarts, starts)
		}
	})
}

func TestSameBitsAtAnyPaceAndOnAnyCores(t *testing.T) {
	r := newRig(t, 150, 4, 0.5)
	make := func(portion int) *recorded {
		s := newRecorded(2, 20_000)
		s.portion = portion
		s.lost = []int64{3000, 3001, 9000}
		s.frames[12_000*channelsThere+3] = 0.5
		return s
	}
	want := mustRun(t, Config{Rig: r, Source: make(1000), Workers: 1})
	if want.Averaged < 20 || want.SetAside < 3 || len(want.Events) < 4 {
		t.Fatalf("%d averaged, %d set aside, %d events: nothing to compare", want.Averaged, want.SetAside, len(want.Events))
	}
	for _, portion := range []int{1, 17, 333} {
		for _, workers := range []int{1, 2, 5} {
			got := mustRun(t, Config{Rig: r, Source: make(portion), Workers: workers})
			if !sameBits(got, want) {
				t.Errorf("portions of %d on %d workers: other bits", portion, workers)
			}
			if !slices.EqualFunc(got.Events, want.Events, func(a, b watch.Event) bool { return fmt.Sprint(a) == fmt.Sprint(b) }) {
				t.Errorf("portions of %d on %d workers: other events", portion, workers)
			}
		}
	}
}

func TestLostFramesOfHoursAreQuick(t *testing.T) {
	s := newRecorded(3, 20_000)
	gap := &losing{recorded: s, at: 10_000, frames: 40_000_000}
	got := mustRun(t, Config{Rig: newRig(t, 30, 4, 0.5), Source: gap})
	if got.Frames != 40_020_000 || got.Gaps != 1 || got.Averaged < 20 || got.Seen < 100_000 {
		t.Errorf("counts %+v", got.Counts)
	}
}

// A losing source loses many frames at once.
type losing struct {
	*recorded
	at, frames int64
	done       bool
}

func (s *losing) Read(dst []float64) (int, error) {
	if s.recorded.at >= s.at && !s.done {
		s.done = true
		return 0, &acquire.GapError{Frames: s.frames}
	}
	return s.recorded.Read(dst)
}

func TestEndAfterBlocks(t *testing.T) {
	r := newRig(t, 390, 10, 0.5)
	s := newRecorded(4, 50_000)
	s.lost = []int64{220, 40_000}
	got := mustRun(t, Config{Rig: r, Source: s, Blocks: 9})
	// Blocks of 100 frames every 50: the two that touch frame 220 are set aside.
	want := Counts{Frames: 600, Seen: 11, Averaged: 9, SetAside: 2, Gaps: 1}
	if got.Counts != want {
		t.Errorf("counts %+v, want %+v", got.Counts, want)
	}
}

func TestOnly(t *testing.T) {
	r := newRig(t, 390, 10, 0.5)
	s := newRecorded(5, 3000)
	s.lost = []int64{420}
	all := mustRun(t, Config{Rig: r, Source: s})
	starts := slices.Collect(all.Snapshot.Starts.All())

	s.at = 0
	again := mustRun(t, Config{Rig: r, Source: s, Only: starts})
	if !sameBits(again, all) {
		t.Error("the blocks of a run, averaged once more, give other bits")
	}
	if len(again.Events) != 0 {
		t.Errorf("%d events with the watch off", len(again.Events))
	}

	s.at = 0
	some := mustRun(t, Config{Rig: r, Source: s, Only: []int64{100, 250}})
	if got := slices.Collect(some.Snapshot.Starts.All()); !slices.Equal(got, []int64{100, 250}) || some.Seen != all.Seen || some.SetAside != all.Seen-2 {
		t.Errorf("blocks %v, counts %+v", got, some.Counts)
	}
}

func TestStoppedInTheMiddle(t *testing.T) {
	r := newRig(t, 150, 4, 0.5)
	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	s := newRecorded(6, 200_000)
	s.endless = true
	progress := 0
	got, err := Run(ctx, Config{Rig: r, Source: s, OnProgress: func(Counts) {
		if progress++; progress == 20 {
			cancel()
		}
	}})
	if err != nil {
		t.Fatal(err)
	}
	short := newRecorded(6, 200_000)
	for int64(len(short.frames)) < got.Frames*channelsThere {
		short.frames = append(short.frames, short.frames...)
	}
	short.frames = short.frames[:got.Frames*channelsThere]
	if want := mustRun(t, Config{Rig: r, Source: short}); !sameBits(got, want) || got.Counts != want.Counts {
		t.Errorf("stopped after %d frames: other results than of a recording that ends there", got.Frames)
	}
}

func TestBrokenSource(t *testing.T) {
	s := newRecorded(7, 5000)
	s.broken = errors.New("cable pulled")
	got, err := Run(t.Context(), Config{Rig: newRig(t, 390, 10, 0.5), Source: s})
	if !errors.Is(err, s.broken) {
		t.Errorf("error %v, want the source's", err)
	}
	if got.Frames != 5000 || got.Averaged != 99 {
		t.Errorf("counts %+v: what came before the break is lost", got.Counts)
	}
}

// TestLiveSourceThatOutrunsTheArithmetic: what can't be taken is lost and counted, and nothing
// waits. The source is as fast as memory, and has its frames numbered by itself.
func TestLiveSourceThatOutrunsTheArithmetic(t *testing.T) {
	s := newRecorded(8, 400_000)
	got := mustRun(t, Config{Rig: newRig(t, 390, 0.25, 0.75), Source: s, Live: true, Workers: 1})
	if got.Frames != 400_000 {
		t.Errorf("%d frames accounted for, want all 400000", got.Frames)
	}
	if got.Seen != got.Averaged+got.SetAside || got.SetAside == 0 {
		t.Errorf("counts %+v", got.Counts)
	}
	if got.Gaps == 0 && got.Overloads == 0 {
		t.Errorf("nothing was lost, or it was not counted: %+v", got.Counts)
	}
}

func TestObserverSeesTheEnd(t *testing.T) {
	r := newRig(t, 390, 10, 0.5)
	var last web.Status
	refreshes, levels := 0, 0
	got := mustRun(t, Config{
		Rig: r, Source: newRecorded(9, 20_000),
		OnRefresh: func(s web.Status, e *estimate.Estimates) *estimate.Estimates {
			last = s
			refreshes++
			return nil
		},
		OnLevels: func(l web.Levels) {
			levels++
			if len(l.RMS) != 3 || !(l.RMS[0] > 0 && l.RMS[0] < 0.45) || !(l.Peak[2] > 0.8 && l.Peak[2] < 0.9) {
				t.Errorf("levels %+v of noise up to 0.45 of full scale", l)
			}
		},
	})
	if refreshes == 0 || last.Averaged != got.Averaged || last.Verdict.State != got.Verdict.State || last.TimeS != 20 {
		t.Errorf("last of %d refreshes %+v, result %+v", refreshes, last, got.Counts)
	}
	if levels == 0 {
		t.Error("no levels")
	}
}

// TestIntakeAllocatesNothing is the hot path from captured frames to a block that is handed on.
func TestIntakeAllocatesNothing(t *testing.T) {
	c := Config{Rig: newRig(t, 120, 4, 0.5), Source: newRecorded(10, 1), Live: true}
	in := newIntake(c, newCapture(c))
	frames := make([]float64, 250*3)
	for i := range frames {
		frames[i] = float64(i%7) / 100
	}
	blocks := 0
	allocs := testing.AllocsPerRun(100, func() {
		in.take(frames)
		for len(in.cuts) > 0 {
			in.free <- (<-in.cuts).block
			blocks++
		}
	})
	if allocs != 0 || blocks < 50 {
		t.Errorf("%v allocations a portion with %d blocks in all, want none with more than 50", allocs, blocks)
	}
}

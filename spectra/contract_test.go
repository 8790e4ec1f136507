package spectra

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// blockCutter is what every cutter of blocks does but Cutter, whose Put knows no lost frames.
type blockCutter interface {
	Put(frames []float64, lost bool) (taken int)
	Full() bool
	Index() int64
	Start() int64
	CopyTo(dst []float64)
	Advance()
	Filled() float64
	Oldest() int64
	Trouble() string
}

// failer is what testing and rapid have in common.
type failer interface {
	Fatalf(format string, args ...any)
}

// checkContract cuts a stream with new cutters, fed in different portions, and compares the blocks bit
// for bit; a block must hold the frames that it says it does.
func checkContract(t failer, m *made, block int, make func() blockCutter) {
	want := m.cutAll(watched{make(), t, new(int64)}, block, len(m.lost))
	for _, portions := range [][]int{{1}, {7, 1, 300}, {64}, {1000, 3}} {
		c := make()
		got := m.cutAll(watched{c, t, new(int64)}, block, portions...)
		if !slices.EqualFunc(got, want, cutBlock.equal) {
			t.Fatalf("in portions of %v blocks start at %v, in one at %v", portions, starts(got), starts(want))
		}
	}
	channels, frames := len(m.forces)+1, m.frames()
	for k, b := range want {
		if b.index != int64(k) || k > 0 && b.start <= want[k-1].start {
			t.Fatalf("block %d has number %d and starts at %d", k, b.index, b.start)
		}
		for ch := range channels {
			for i := range block {
				got, want := b.samples[ch*block+i], frames[(int(b.start)+i)*channels+ch]
				if math.Float64bits(got) != math.Float64bits(want) {
					t.Fatalf("block %d channel %d sample %d is %v, want %v", k, ch, i, got, want)
				}
			}
		}
	}
}

func (b cutBlock) equal(other cutBlock) bool {
	return b.index == other.index && b.start == other.start &&
		slices.EqualFunc(b.samples, other.samples, func(x, y float64) bool {
			return math.Float64bits(x) == math.Float64bits(y)
		})
}

// watched is a cutter whose promises are checked at every step.
type watched struct {
	blockCutter
	t      failer
	oldest *int64
}

func (w watched) Put(frames []float64, lost bool) int {
	taken := w.blockCutter.Put(frames, lost)
	if taken < len(frames) && !w.Full() {
		w.t.Fatalf("a cutter without a full block took %d of %d", taken, len(frames))
	}
	w.check()
	return taken
}

func (w watched) Advance() {
	w.blockCutter.Advance()
	w.check()
}

func (w watched) check() {
	if share := w.Filled(); !(share >= 0 && share <= 1) {
		w.t.Fatalf("filled to %v", share)
	}
	oldest := w.Oldest()
	if oldest < *w.oldest {
		w.t.Fatalf("nothing starts before %d, and then before %d", *w.oldest, oldest)
	}
	*w.oldest = oldest
	if w.Full() && w.Start() < oldest {
		w.t.Fatalf("a block starts at %d, nothing before %d", w.Start(), oldest)
	}
	if trouble := w.Trouble(); trouble != "" && !strings.Contains(trouble, ": ") {
		w.t.Fatalf("%q does not say what to do", trouble)
	}
}

func wantPanic(t *testing.T, do func()) {
	t.Helper()
	defer func() {
		if r, ok := recover().(string); !ok || !strings.HasPrefix(r, "spectra: ") {
			t.Errorf("panics with %q", r)
		}
	}()
	do()
}

// wantNoAllocations feeds the stream once, then counts the allocations of feeding it again.
func wantNoAllocations(t *testing.T, m *made, block int, c blockCutter) {
	t.Helper()
	frames, dst := m.frames(), make([]float64, block*(len(m.forces)+1))
	blocks := 0
	allocs := testing.AllocsPerRun(2, func() {
		for part := frames; len(part) > 0; {
			part = part[c.Put(part, false):]
			for c.Full() {
				blocks++
				c.CopyTo(dst)
				c.Advance()
			}
			c.Trouble()
		}
	})
	if allocs != 0 || blocks == 0 {
		t.Errorf("%v allocations and %d blocks, want none and some", allocs, blocks)
	}
}

// Whatever the frames are, a cutter keeps its contract.
func FuzzCutters(f *testing.F) {
	f.Add(uint16(30), uint16(20), uint8(1), []byte("\x00\x00\x00\x00\x00\x80\xff\x10\x00\x00\x00\x00\x00\x90\xe0\x33"))
	f.Add(uint16(8), uint16(8), uint8(0), []byte{1, 255, 254, 253, 0, 9, 9, 9, 252, 3})
	f.Add(uint16(30), uint16(20), uint8(0), []byte("\x00\x00\x00\x00\x00\x10\x00\x10\x00\x00\x00\x00\x00\x90\xe03")) // a phase found and lost again
	f.Fuzz(func(t *testing.T, period, block uint16, settle uint8, data []byte) {
		p := 1 + int(period)%200
		b := 1 + int(block)%p
		m := newMade(1, min(len(data)*16, 4000))
		for n := range m.lost {
			m.lost[n] = data[n/16] == 255
			m.forces[0][n] = fuzzed(data[(n/16+n)%len(data)])
		}
		s := int(settle) % 4
		pre := int(settle) % b
		checkContract(t, m, b, func() blockCutter { return NewTriggerCutter(2, 0, b, pre, 0.1) })
		checkContract(t, m, b, func() blockCutter { return NewBurstCutter(2, 1, b, float64(p)+float64(s)/7) })
		checkContract(t, m, 2*p, func() blockCutter { return NewPeriodicCutter(2, 1, p, s, 2, 3) })
	})
}

// fuzzed is a sample for a byte, now and then an absurd one.
func fuzzed(b byte) float64 {
	switch b {
	case 254:
		return math.NaN()
	case 253:
		return math.Inf(-1)
	case 252:
		return 1e300
	}
	return float64(int8(b)) / 16
}

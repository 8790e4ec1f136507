package spectra

import (
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// cutAll cuts frames in portions of the given sizes (in turn) and returns the blocks.
func cutAll(c *Cutter, frames []float64, channels, block int, portions []int) [][]float64 {
	var blocks [][]float64
	for i := 0; len(frames) > 0; i++ {
		n := min(portions[i%len(portions)]*channels, len(frames))
		part := frames[:n]
		frames = frames[n:]
		for len(part) > 0 {
			part = part[c.Put(part, false):]
			if c.Full() {
				dst := make([]float64, channels*block)
				c.CopyTo(dst)
				blocks = append(blocks, dst)
				c.Advance()
			}
		}
	}
	return blocks
}

func TestCutterCutsTheGrid(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		channels := rapid.IntRange(1, 4).Draw(t, "channels")
		block := rapid.IntRange(1, 40).Draw(t, "block")
		hop := rapid.IntRange(1, block).Draw(t, "hop")
		total := rapid.IntRange(0, 200).Draw(t, "frames")
		portions := rapid.SliceOfN(rapid.IntRange(1, 60), 1, 5).Draw(t, "portions")
		// The sample of channel ch in frame n is 10n + ch, so that each tells where it belongs.
		frames := make([]float64, total*channels)
		for i := range frames {
			frames[i] = float64(i/channels*10 + i%channels)
		}
		blocks := cutAll(NewCutter(channels, block, hop), frames, channels, block, portions)
		want := 0
		if total >= block {
			want = (total-block)/hop + 1
		}
		if len(blocks) != want {
			t.Fatalf("%d blocks, want %d", len(blocks), want)
		}
		for k, b := range blocks {
			for ch := range channels {
				for i := range block {
					if got, want := b[ch*block+i], float64((k*hop+i)*10+ch); got != want {
						t.Fatalf("block %d channel %d sample %d is %v, want %v", k, ch, i, got, want)
					}
				}
			}
		}
	})
}

func TestCutterStarts(t *testing.T) {
	c := NewCutter(2, 6, 4)
	frames := make([]float64, 2*6)
	for _, want := range []int64{0, 4, 8} {
		for len(frames) > 0 && !c.Full() {
			frames = frames[c.Put(frames, false):]
		}
		if c.Start() != want || c.Oldest() != want {
			t.Errorf("block %d starts at %d and nothing before %d, want %d", c.Index(), c.Start(), c.Oldest(), want)
		}
		c.Advance()
		frames = make([]float64, 2*4)
	}
	if c.Trouble() != "" {
		t.Errorf("a grid in trouble: %s", c.Trouble())
	}
}

func TestCutterAllocatesNothing(t *testing.T) {
	const channels, block, hop = 8, 256, 128
	c := NewCutter(channels, block, hop)
	frames, dst := make([]float64, 100*channels), make([]float64, channels*block)
	allocs := testing.AllocsPerRun(100, func() {
		for part := frames; len(part) > 0; {
			part = part[c.Put(part, false):]
			if c.Full() {
				c.CopyTo(dst)
				c.Advance()
			}
		}
	})
	if allocs != 0 {
		t.Errorf("%v allocations a call, want none", allocs)
	}
}

func TestStarts(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		steps := rapid.SliceOfN(rapid.SampledFrom([]int64{1, 512, 512, 512, 7}), 0, 50).Draw(t, "steps")
		var s Starts
		var want []int64
		at := int64(-1)
		for _, step := range steps {
			at += step
			s.Append(at)
			want = append(want, at)
		}
		if got := slices.Collect(s.All()); !slices.Equal(got, want) || s.Len() != len(want) {
			t.Fatalf("list %v of length %d, want %v", got, s.Len(), want)
		}
	})
}

func TestStartsStayShort(t *testing.T) {
	var s Starts
	for k := range int64(100_000) {
		s.Append(2048 * k)
	}
	if len(s.runs) != 1 {
		t.Errorf("an undisturbed average is kept as %d runs, want 1", len(s.runs))
	}
}

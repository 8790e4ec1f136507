package spectra

import (
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestTriggerCutter(t *testing.T) {
	const block, length = 1024, 600
	for _, test := range []struct {
		name    string
		pre     int
		level   float64
		frames  int
		make    func(m *made)
		want    []int64
		trouble string // a part of it
	}{
		{"a block begins before each burst", 10, 0.1, 5000, func(m *made) {
			m.bursts(newRand(1), []int{300, 1500, 3001}, length)
		}, []int64{290, 1490, 2991}, ""},
		{"bursts as close as blocks", 10, 0.1, 4000, func(m *made) {
			m.bursts(newRand(2), []int{300, 300 + block, 300 + 2*block}, length)
		}, []int64{290, 290 + block, 290 + 2*block}, ""},
		{"a burst inside a block starts none", 0, 0.1, 5000, func(m *made) {
			m.bursts(newRand(3), []int{300, 1100, 2500}, 200)
		}, []int64{300, 2500}, ""},
		{"a burst that runs when the stream begins is not seen", 0, 0.1, 5000, func(m *made) {
			m.bursts(newRand(4), []int{-100, 1500}, length)
		}, []int64{1500}, ""},
		{"nor one on the first frame", 0, 0.1, 5000, func(m *made) {
			m.bursts(newRand(5), []int{0, 1500}, length)
		}, []int64{1500}, ""},
		{"one that would start before it makes no late block", 60, 0.1, 5000, func(m *made) {
			m.bursts(newRand(6), []int{40, 1500}, length)
		}, []int64{1440}, ""},
		{"the beginning of a stream need be quiet for long only where it is not silent", 0, 0.1, 2000, func(m *made) {
			m.bursts(newRand(7), []int{3}, length)
		}, []int64{3}, ""},
		{"noise before the first burst makes no block", 0, 0.1, 8000, func(m *made) {
			m.bursts(newRand(8), []int{5000, 6500}, length).addNoise(newRand(9), 0.01)
		}, []int64{5000, 6500}, ""},
		{"nor a bump in it", 0, 0.1, 4000, func(m *made) {
			m.bursts(newRand(10), []int{1500, 2600}, length)
			m.forces[0][1200], m.forces[0][1201] = 0.01, -0.02
		}, []int64{1500, 2600}, ""},
		{"a burst longer than its block", 0, 0.1, 7000, func(m *made) {
			m.bursts(newRand(11), []int{300, 3300}, block+300)
		}, []int64{300, 3300}, "make the bursts shorter"},
		{"continuous random", 10, 0.1, 20 * block, func(m *made) {
			m.bursts(newRand(12), []int{0}, 20*block)
		}, nil, "never quiet"},
		{"continuous random, high trigger", 10, 0.5, 20 * block, func(m *made) {
			m.bursts(newRand(13), []int{0}, 20*block)
		}, nil, "never quiet"},
		{"a burst that began at the end of a block makes no late one", 0, 0.1, 5000, func(m *made) {
			m.bursts(newRand(18), []int{300, 300 + block - 6, 3001}, length)
		}, []int64{300, 3001}, ""},
		{"silence", 10, 0.1, 20 * block, func(*made) {}, nil, "switch the drive on"},
		{"after a knock", 10, 0.1, 20 * block, func(m *made) {
			m.bursts(newRand(14), every(700, 1200, 19*block), length)
			m.forces[0][500] = 1e3
		}, []int64{490}, "knock"},
		{"lost frames do not trigger or count for the peak", 10, 0.1, 5000, func(m *made) {
			m.bursts(newRand(15), []int{300, 1500, 3001}, length)
			m.lose(2600, 2620)
			m.forces[0][2610] = 1e6
		}, []int64{290, 1490, 2991}, ""},
		{"a burst that began in lost frames", 0, 0.1, 5000, func(m *made) {
			m.bursts(newRand(16), []int{300, 1500, 3001}, length)
			m.lose(1490, 1510)
		}, []int64{300, 3001}, ""},
		{"lost frames behind the trigger", 10, 0.1, 5000, func(m *made) {
			m.bursts(newRand(17), []int{300, 1500, 3001}, length)
			m.lose(1700, 1800)
		}, []int64{290, 1490, 2991}, ""},
	} {
		t.Run(test.name, func(t *testing.T) {
			m := newMade(1, test.frames)
			test.make(m)
			// The trigger is |x| above a share of its peak: a burst whose first values are small starts later.
			c := NewTriggerCutter(2, 0, block, test.pre, test.level)
			got := starts(m.cutAll(c, block))
			if !nearly(got, test.want, 0, 4) {
				t.Errorf("blocks start at %v, want %v or up to 4 frames later", got, test.want)
			}
			if trouble := c.Trouble(); (trouble != "") != (test.trouble != "") || !strings.Contains(trouble, test.trouble) {
				t.Errorf("trouble %q, want %q", trouble, test.trouble)
			}
		})
	}
}

// nearly tells whether each start is where it is wanted, at most so much earlier or later.
func nearly(got, want []int64, earlier, later int64) bool {
	return slices.EqualFunc(got, want, func(g, w int64) bool { return g >= w-earlier && g <= w+later })
}

// The rule word for word, on signals of a few values.
func TestTriggerRule(t *testing.T) {
	const block, pre, level = 200, 5, 0.25
	quiet := make([]float64, 100)
	m := newMade(1, 1200)
	x := m.forces[0]
	copy(x, quiet)
	x[100] = 0.2 // the peak so far, but less than a quarter of what follows: noise
	x[101] = 1
	for n := 102; n < 180; n++ {
		x[n] = 0.9
	}
	x[400], x[401] = -0.25, -0.26 // not above a quarter of the peak, and above it
	for n := 402; n < 450; n++ {
		x[n] = -3.9 // grown by no more than 1/level
	}
	x[700], x[701] = 0.9, 1.0 // a quarter of 3.9 is 0.975
	for n := 702; n < 750; n++ {
		x[n] = 2
	}
	c := NewTriggerCutter(2, 0, block, pre, level)
	if got, want := starts(m.cutAll(c, block)), []int64{96, 396, 696}; !slices.Equal(got, want) {
		t.Errorf("blocks start at %v, want %v", got, want)
	}
}

func TestTriggerCutterKeepsItsContract(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		block := rapid.IntRange(64, 400).Draw(t, "block")
		pre := rapid.IntRange(0, block/4).Draw(t, "pre")
		gap := rapid.IntRange(0, block).Draw(t, "gap")
		noise := rapid.SampledFrom([]float64{0, 0.01, 0.03}).Draw(t, "noise")
		rng := newRand(rapid.Uint64().Draw(t, "seed"))
		m := newMade(2, 8*block)
		onsets := every(float64(rng.IntN(2*block)), float64(block+gap), len(m.lost))
		m.bursts(rng, onsets, block/2).addNoise(rng, noise)
		if rapid.Bool().Draw(t, "lost") {
			at := rng.IntN(len(m.lost))
			m.lose(at, min(len(m.lost), at+rng.IntN(2*block)))
		}
		checkContract(t, m, block, func() blockCutter { return NewTriggerCutter(3, 1, block, pre, 0.1) })
	})
}

func TestTriggerCutterFindsBursts(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const block, pre = 640, 8
		rng := newRand(rapid.Uint64().Draw(t, "seed"))
		noise := rapid.SampledFrom([]float64{0, 0.003, 0.01}).Draw(t, "noise")
		m := newMade(1, 10*block)
		var onsets []int
		for at := 100 + rng.IntN(block); at+block < len(m.lost); at += block + 16 + rng.IntN(block) {
			onsets = append(onsets, at)
		}
		m.bursts(rng, onsets, 300+rng.IntN(200)).addNoise(rng, noise)
		want := triggered(m.forces[0], onsets, block, pre, 0.1)
		if got := starts(m.cutAll(NewTriggerCutter(2, 0, block, pre, 0.1), block)); !slices.Equal(got, want) {
			t.Errorf("blocks start at %v, want %v", got, want)
		}
	})
}

// triggered is where blocks start by the rule, looked for from the onset of each burst on.
func triggered(x []float64, onsets []int, block, pre int, level float64) (blocks []int64) {
	peak := func(before int) (p float64) {
		for _, v := range x[:before] {
			p = max(p, math.Abs(v))
		}
		return p
	}
	known := 0
	for _, n := range onsets {
		for ; n-pre+block <= len(x); n++ {
			known = max(known, n+1)
			then := peak(known)
			if math.Abs(x[n]) <= level*then {
				continue
			}
			known = max(known, n-pre+block)
			if peak(known) <= then/level {
				blocks = append(blocks, int64(n-pre))
				break
			}
		}
	}
	return blocks
}

func TestTriggerCutterPanics(t *testing.T) {
	for name, make := range map[string]func(){
		"channel":    func() { NewTriggerCutter(2, 2, 10, 0, 0.1) },
		"level":      func() { NewTriggerCutter(2, 0, 10, 0, 1) },
		"pre":        func() { NewTriggerCutter(2, 0, 10, 10, 0.1) },
		"not full":   func() { NewTriggerCutter(2, 0, 10, 0, 0.1).Advance() },
		"no block":   func() { NewTriggerCutter(2, 0, 10, 0, 0.1).CopyTo(nil) },
		"half frame": func() { NewTriggerCutter(2, 0, 10, 0, 0.1).Put([]float64{1}, false) },
	} {
		t.Run(name, func(t *testing.T) { wantPanic(t, make) })
	}
}

func TestTriggerCutterAllocatesNothing(t *testing.T) {
	m := newMade(2, 40*512)
	m.bursts(newRand(1), every(100, 600, len(m.lost)), 300).addNoise(newRand(2), 0.01)
	wantNoAllocations(t, m, 512, NewTriggerCutter(3, 0, 512, 10, 0.1))
}

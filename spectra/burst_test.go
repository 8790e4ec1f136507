package spectra

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestBurstCutter(t *testing.T) {
	const period, block, length = 1000.0, 900, 600
	at := func(first float64, bursts ...int) (want []int64) {
		for _, k := range bursts {
			want = append(want, int64(first+float64(k)*period))
		}
		return want
	}
	for _, test := range []struct {
		name    string
		forces  int
		frames  int
		make    func(m *made)
		want    []int64
		trouble string // a part of it
	}{
		{"from the first burst on", 2, 6000, func(m *made) {
			m.bursts(newRand(1), every(300, period, 6000), length)
		}, at(300, 0, 1, 2, 3, 4), ""},
		{"a burst that runs when the stream begins is left out", 1, 6000, func(m *made) {
			m.bursts(newRand(2), every(-100, period, 6000), length)
		}, at(900, 0, 1, 2, 3, 4), ""},
		{"silence first", 1, 12000, func(m *made) {
			m.bursts(newRand(3), every(5432, period, 12000), length)
		}, at(5432, 0, 1, 2, 3, 4, 5), ""},
		{"noise and a knock first", 1, 12000, func(m *made) {
			m.addNoise(newRand(4), 0.01).bursts(newRand(5), every(5432, period, 12000), length)
			m.forces[0][2222] = 5
		}, at(5432, 0, 1, 2, 3, 4, 5), ""},
		{"a force of noise alone, and one that is silent", 3, 6000, func(m *made) {
			m.bursts(newRand(6), every(300, period, 6000), length)
			for n := range m.lost {
				m.forces[0][n], m.forces[1][n] = 0, 0
			}
			m.addNoise(newRand(7), 0.02)
			clear(m.forces[1])
		}, at(300, 0, 1, 2, 3, 4), ""},
		{"unequal levels and offsets", 2, 6000, func(m *made) {
			m.bursts(newRand(8), every(300, period, 6000), length)
			for n := range m.lost {
				m.forces[0][n] = 1e-3*m.forces[0][n] + 50
				m.forces[1][n] -= 20
			}
		}, at(300, 0, 1, 2, 3, 4), ""},
		{"bursts of a fifth of the level", 1, 9000, func(m *made) {
			m.bursts(newRand(9), every(300, period, 9000), length)
			for n := 4000; n < 9000; n++ {
				m.forces[0][n] *= 0.2
			}
			m.addNoise(newRand(10), 0.005)
		}, at(300, 0, 1, 2, 3, 4, 5, 6, 7), ""},
		{"a block with lost frames is cut", 1, 8000, func(m *made) {
			m.bursts(newRand(11), every(300, period, 8000), length)
			m.lose(4250, 4350)
			m.lose(5700, 5750)
		}, at(300, 0, 1, 2, 3, 4, 5, 6), ""},
		{"lost frames while it looks", 1, 8000, func(m *made) {
			m.bursts(newRand(12), every(300, period, 8000), length)
			m.lose(1350, 1360)
		}, at(300, 2, 3, 4, 5, 6), ""},
		{"the drive stops: two silent blocks and a third, then none", 1, 14000, func(m *made) {
			m.bursts(newRand(13), every(300, period, 5000), length).addNoise(newRand(14), 0.01)
		}, at(300, 0, 1, 2, 3, 4, 5, 6, 7), "no bursts"},
		{"it starts again elsewhere", 1, 20000, func(m *made) {
			m.bursts(newRand(15), every(300, period, 5000), length)
			m.bursts(newRand(16), every(12780, period, 20000), length)
		}, append(at(300, 0, 1, 2, 3, 4, 5, 6, 7), at(12780, 0, 1, 2, 3, 4, 5, 6)...), ""},
		{"its phase jumps", 1, 14000, func(m *made) {
			m.bursts(newRand(17), every(300, period, 5000), length)
			m.bursts(newRand(18), every(5700, period, 14000), length)
		}, append(at(300, 0, 1, 2, 3, 4), at(5700, 0, 1, 2, 3, 4, 5, 6, 7)...), ""},
		{"continuous random", 2, 9000, func(m *made) { m.addNoise(newRand(19), 1) }, nil, "no bursts"},
		{"silence", 2, 9000, func(*made) {}, nil, "no bursts"},
		{"half the true period declared", 1, 20000, func(m *made) {
			m.bursts(newRand(20), every(300, 2*period, 20000), length)
		}, nil, "no bursts"},
		{"twice the true period declared", 1, 9000, func(m *made) {
			m.bursts(newRand(21), every(300, period/2, 9000), 300)
		}, at(800, 0, 1, 2, 3, 4, 5, 6, 7), "more than one burst"},
		{"a wrong period", 1, 20000, func(m *made) {
			m.bursts(newRand(22), every(300, 1.015*period, 20000), length)
		}, nil, "check the period"},
	} {
		t.Run(test.name, func(t *testing.T) {
			m := newMade(test.forces, test.frames)
			test.make(m)
			c := NewBurstCutter(test.forces+1, test.forces, block, period)
			got := starts(m.cutAll(c, block))
			if !nearly(got, test.want, 10, -1) {
				t.Errorf("blocks start at %v, want 1 to 10 frames before %v", got, test.want)
			}
			if trouble := c.Trouble(); (trouble != "") != (test.trouble != "") || !strings.Contains(trouble, test.trouble) {
				t.Errorf("trouble %q, want %q", trouble, test.trouble)
			}
		})
	}
}

// After silence every start is at most a few frames before the first frame of a burst and never behind
// it, whatever the period, the phase and the length; then with noise 30 dB below the burst.
func TestBurstCutterStartsBeforeTheOnset(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		period := rapid.Float64Range(300, 3000).Draw(t, "period")
		rng := newRand(rapid.Uint64().Draw(t, "seed"))
		noise := rapid.SampledFrom([]float64{0, 0.01, 0.0316}).Draw(t, "noise")
		block := int(period * (0.8 + 0.2*rng.Float64()))
		onsets := every(20+(period-20)*rng.Float64(), period, int(8*period))
		m := newMade(1+rng.IntN(3), onsets[len(onsets)-1]+block)
		m.bursts(rng, onsets, int((0.2+0.6*rng.Float64())*period)).addNoise(rng, noise)
		c := NewBurstCutter(len(m.forces)+1, len(m.forces), block, period)
		var want []int64
		for _, at := range onsets {
			want = append(want, int64(at))
		}
		got := starts(m.cutAll(c, block))
		if !nearly(got, want, 12, -1) {
			t.Errorf("blocks start at %v, want 1 to 12 frames before %v", got, want)
		}
	})
}

// The margins seen on forces that react to a structure, after a decimator, in noise.
func TestBurstCutterOnAStructure(t *testing.T) {
	for _, noise := range []float64{0.003, 0.01, 0.0316} {
		for _, drift := range []float64{0, 1e-5, -1e-5, 2e-4, -2e-4} {
			t.Run(fmt.Sprintf("noise %v drift %v", noise, drift), func(t *testing.T) {
				const period, block, bursts = 2400.3, 2200, 30
				var errors []int
				for seed := range uint64(2) {
					rng := newRand(seed)
					m := newMade(2, bursts*period)
					onsets := every(800*rng.Float64()+100, period*(1+drift), len(m.lost))
					m.bursts(rng, onsets, 1400).react(0.05, 0.98).smear(0.43).addNoise(rng, noise)
					c := NewBurstCutter(3, 2, block, period)
					got := starts(m.cutAll(c, block))
					if len(got) < len(onsets)-1 || len(got) > len(onsets) {
						t.Fatalf("%d blocks from %d bursts", len(got), len(onsets))
					}
					for k, start := range got {
						errors = append(errors, int(start)-onsets[k])
					}
				}
				least, median, most := spread(errors)
				t.Logf("blocks start %d, %d, %d frames from the onset (earliest, median, latest)", least, median, most)
				if least < -32 || most > -2 {
					t.Error("want 2 to 32 before it")
				}
			})
		}
	}
}

// A burst that comes early is not cut late, nor are bursts that rise slowly out of the noise when one in
// five does not.
func TestBurstCutterIsNeverLate(t *testing.T) {
	const period, block = 1000, 900
	t.Run("one early", func(t *testing.T) {
		onsets := every(300, period, 12000)
		onsets[7] -= 14
		m := newMade(1, 12300).bursts(newRand(1), onsets, 600)
		for k, start := range starts(m.cutAll(NewBurstCutter(2, 1, block, period), block)) {
			if start >= int64(onsets[k]) {
				t.Errorf("block %d starts at %d, its burst at %d", k, start, onsets[k])
			}
		}
	})
	t.Run("slow rises", func(t *testing.T) {
		onsets := every(300, period, 20000)
		m := newMade(1, 20300).bursts(newRand(2), onsets, 600)
		for k, at := range onsets {
			if k%5 != 1 {
				m.scale(at, at+15, 0.02)
			}
		}
		m.addNoise(newRand(3), 0.1)
		for k, start := range starts(m.cutAll(NewBurstCutter(2, 1, block, period), block)) {
			if start >= int64(onsets[k]) {
				t.Errorf("block %d starts at %d, its burst at %d", k, start, onsets[k])
			}
		}
	})
}

// Blocks that fill the period never overlap, even when the bursts come faster than declared.
func TestBurstCutterBlocksDoNotOverlap(t *testing.T) {
	const period = 512.0
	m := newMade(1, 60*period)
	m.bursts(newRand(1), every(100, period*(1-3e-4), len(m.lost)), 300).addNoise(newRand(2), 0.01)
	got := starts(m.cutAll(NewBurstCutter(2, 1, period, period), period))
	for k := 1; k < len(got); k++ {
		if got[k] < got[k-1]+period {
			t.Errorf("block %d starts at %d, in the block from %d", k, got[k], got[k-1])
		}
	}
	if len(got) < 55 {
		t.Errorf("%d blocks from 60 bursts", len(got))
	}
}

func TestBurstCutterKeepsItsContract(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		period := rapid.Float64Range(20, 400).Draw(t, "period")
		block := rapid.IntRange(1, int(period)).Draw(t, "block")
		rng := newRand(rapid.Uint64().Draw(t, "seed"))
		m := newMade(2, int(9*period))
		m.bursts(rng, every(period*rng.Float64(), period*(1+0.01*rng.Float64()), len(m.lost)), int(period/2))
		m.addNoise(rng, rapid.SampledFrom([]float64{0, 0.03, 1}).Draw(t, "noise"))
		if rapid.Bool().Draw(t, "lost") {
			at := rng.IntN(len(m.lost))
			m.lose(at, min(len(m.lost), at+rng.IntN(2*block)))
		}
		if rapid.Bool().Draw(t, "stop") {
			for n := int(5 * period); n < int(7*period); n++ {
				m.forces[0][n], m.forces[1][n] = 0, 0
			}
		}
		checkContract(t, m, block, func() blockCutter { return NewBurstCutter(3, 2, block, period) })
	})
}

// spread is the least, the middle one and the most.
func spread(values []int) (least, median, most int) {
	least, most = math.MaxInt, math.MinInt
	for _, v := range values {
		least, most = min(least, v), max(most, v)
	}
	best := math.MaxInt
	for _, v := range values {
		balance := 0
		for _, w := range values {
			if w < v {
				balance++
			} else if w > v {
				balance--
			}
		}
		if balance = max(balance, -balance); balance < best {
			best, median = balance, v
		}
	}
	return least, median, most
}

func TestBurstCutterPanics(t *testing.T) {
	for name, make := range map[string]func(){
		"forces":     func() { NewBurstCutter(2, 3, 10, 10) },
		"block":      func() { NewBurstCutter(2, 1, 11, 10) },
		"not full":   func() { NewBurstCutter(2, 1, 10, 10).Advance() },
		"no block":   func() { NewBurstCutter(2, 1, 10, 10).CopyTo(nil) },
		"half frame": func() { NewBurstCutter(2, 1, 10, 10).Put([]float64{1}, false) },
	} {
		t.Run(name, func(t *testing.T) { wantPanic(t, make) })
	}
}

func TestBurstCutterAllocatesNothing(t *testing.T) {
	m := newMade(2, 20*600)
	m.bursts(newRand(1), every(100, 600, len(m.lost)), 300).addNoise(newRand(2), 0.01)
	wantNoAllocations(t, m, 512, NewBurstCutter(3, 2, 512, 600))
}

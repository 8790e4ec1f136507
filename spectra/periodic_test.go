package spectra

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// repeat puts random blocks, each of so many periods, into the forces from a frame on and returns where each
// begins.
func (m *made) repeat(rng *rand.Rand, first, period int, periods ...int) (changes []int) {
	for _, count := range periods {
		changes = append(changes, first)
		for _, x := range m.forces {
			sequence := make([]float64, period)
			for i := range sequence {
				sequence[i] = rng.NormFloat64()
			}
			for n := first; n < first+count*period && n < len(x); n++ {
				if n >= 0 {
					x[n] = sequence[(n-first)%period]
				}
			}
		}
		first += count * period
	}
	return changes
}

// scale multiplies the forces in some frames.
func (m *made) scale(from, before int, by float64) {
	for _, x := range m.forces {
		for n := from; n < before; n++ {
			x[n] *= by
		}
	}
}

func TestPeriodicCutter(t *testing.T) {
	const period, settle, keep = 512, 2, 2
	// The whole stream: three periods of a block whose start is not seen, then six blocks.
	const first, frames = 1400, 1400 + 29*period
	blocks := func(m *made) {
		m.repeat(newRand(1), first-4*period, period, 4, 4, 6, 4, 5, 4, 4)
	}
	at := func(periods ...int) (want []int64) {
		for _, k := range periods {
			want = append(want, int64(first+(k+settle)*period))
		}
		return want
	}
	all := at(0, 4, 10, 14, 19, 23)
	for _, test := range []struct {
		name     string
		forces   int
		make     func(m *made)
		want     []int64
		repeated bool
		trouble  string // a part of it
	}{
		{"each random block", 2, blocks, all, true, ""},
		{"one of them too short", 2, func(m *made) {
			m.repeat(newRand(1), first-4*period, period, 4, 4, 3, 4, 4, 6, 4, 4)
		}, at(0, 7, 11, 15, 21, 25), true, ""},
		{"one of a single period", 2, func(m *made) {
			m.repeat(newRand(1), first-4*period, period, 4, 4, 1, 4, 4, 6, 6, 4)
		}, at(0, 9, 13, 19, 25), true, ""},
		{"the last one cut short", 2, func(m *made) {
			m.repeat(newRand(1), first-4*period, period, 4, 4, 6, 4, 5, 7, 4)
		}, at(0, 4, 10, 14, 19), true, ""},
		{"silence first", 2, func(m *made) { blocks(m); m.scale(0, first, 0) }, all, true, ""},
		{"noise first", 2, func(m *made) { blocks(m); m.scale(0, first, 0); m.addNoise(newRand(2), 0.1) }, all, true, ""},
		{"noise of 30 %", 2, func(m *made) { blocks(m); m.addNoise(newRand(2), 0.3) }, all, true, ""},
		{"a force of noise, one that is silent, an offset", 4, func(m *made) {
			blocks(m)
			clear(m.forces[0])
			clear(m.forces[1])
			for n := range m.lost {
				m.forces[0][n] = 0.3 * m.forces[3][(n*7)%frames]
				m.forces[2][n] += 30
				m.forces[3][n] *= 0.01
			}
		}, all, true, ""},
		{"levels that change from block to block", 2, func(m *made) {
			blocks(m)
			m.scale(first+4*period, first+10*period, 0.2)
			m.scale(first+14*period, first+19*period, 5)
			m.addNoise(newRand(2), 0.02)
		}, all, true, ""},
		{"a knock while it settles", 1, func(m *made) {
			blocks(m)
			for n := range 40 {
				m.forces[0][first+5*period+100+n] += 30 * math.Exp(-float64(n)/8)
			}
		}, all, true, ""},
		{"a knock in the kept periods", 1, func(m *made) {
			blocks(m)
			for n := range 40 {
				m.forces[0][first+7*period+100+n] += 30 * math.Exp(-float64(n)/8)
			}
		}, all, true, ""},
		{"a level 35 dB lower that stays", 2, func(m *made) {
			blocks(m)
			m.scale(first+4*period, frames, 0.018)
		}, at(0, 14, 19, 23), true, ""},
		{"a level 35 dB lower in the end", 2, func(m *made) {
			blocks(m)
			m.scale(first+23*period, frames, 0.018)
		}, at(0, 4, 10, 14, 19), true, "weaker than before"},
		{"amplifiers off, silence", 1, func(m *made) {
			blocks(m)
			m.scale(first+5*period+77, first+19*period, 0)
		}, at(0, 19, 23), true, ""},
		{"amplifiers off, noise", 1, func(m *made) {
			blocks(m)
			m.scale(first+5*period+77, first+19*period, 0)
			m.addNoise(newRand(2), 0.01)
		}, at(0, 19, 23), true, ""},
		{"amplifiers off, hum that fits into the period", 1, func(m *made) {
			blocks(m)
			m.scale(first+5*period+77, first+19*period, 0)
			for n := range m.lost {
				m.forces[0][n] += 0.01 * math.Sin(2*math.Pi*16*float64(n)/period)
			}
		}, at(0, 19, 23), true, ""},
		{"lost frames in kept periods", 2, func(m *made) {
			blocks(m)
			m.lose(first+2*period+100, first+2*period+300)
			m.lose(first+17*period, first+17*period+10)
		}, all, true, ""},
		{"lost frames while it settles", 2, func(m *made) {
			blocks(m)
			m.lose(first+5*period, first+5*period+300)
		}, all, true, ""},
		{"a change in lost frames", 2, func(m *made) {
			blocks(m)
			m.lose(first+4*period-30, first+4*period+1)
		}, at(0, 10, 14, 19, 23), true, ""},
		{"a change in a longer loss, while it settles", 2, func(m *made) {
			m.repeat(newRand(1), first-4*period, period, 4, 4, 1, 5, 4, 5, 4, 4)
			m.lose(first+5*period-200, first+5*period+100)
		}, at(0, 10, 14, 19, 23), true, ""},
		{"a loss of more than a period", 2, func(m *made) {
			blocks(m)
			m.lose(first+5*period, first+6*period+1)
		}, at(0, 10, 14, 19, 23), true, ""},
		{"continuous random", 2, func(m *made) { m.addNoise(newRand(2), 1) }, nil, false, "do not repeat every 1536 frames"},
		{"silence", 2, func(*made) {}, nil, false, "silent"},
		{"offsets alone", 2, func(m *made) {
			for n := range m.lost {
				m.forces[0][n], m.forces[1][n] = 0.1, -7.3
			}
		}, nil, false, "silent"},
		{"a period longer than declared by a frame", 2, func(m *made) {
			m.repeat(newRand(1), 0, period+1, 8, 8, 8, 8)
		}, nil, false, "share a clock"},
		{"half the true period declared", 2, func(m *made) {
			m.repeat(newRand(1), 0, 2*period, 4, 4, 4, 4)
		}, nil, false, "check the period"},
		{"twice the true period declared", 2, func(m *made) {
			m.repeat(newRand(1), first-8*period/2, period/2, 8, 8, 12, 8, 10, 8, 8)
		}, all, true, "repeat 2 times within 1536 frames"},
		{"random blocks that are all too short", 2, func(m *made) {
			m.repeat(newRand(1), first-3*period, period, 3, 3, 3, 3, 3, 3, 3, 3, 3)
		}, nil, true, "before 2 + 2 periods"},
		{"one that never changes", 2, func(m *made) {
			m.repeat(newRand(1), 0, period, 45)
			m.extend(45 * period)
		}, nil, true, "no new random block"},
	} {
		t.Run(test.name, func(t *testing.T) {
			m := newMade(test.forces, frames)
			test.make(m)
			c := NewPeriodicCutter(test.forces+1, test.forces, period, settle, keep, 3)
			got := starts(m.cutAll(c, keep*period))
			if !nearly(got, test.want, 40, -4) {
				t.Errorf("blocks start at %v, want 4 to 40 frames before %v", got, test.want)
			}
			if c.Repeated() != test.repeated {
				t.Errorf("repeated is %v", c.Repeated())
			}
			if trouble := c.Trouble(); (trouble != "") != (test.trouble != "") || !strings.Contains(trouble, test.trouble) {
				t.Errorf("trouble %q, want %q", trouble, test.trouble)
			}
		})
	}
}

// extend makes the stream longer by repeating its last 512 frames.
func (m *made) extend(frames int) {
	for i, x := range m.forces {
		for n := len(x); n < frames; n++ {
			x = append(x, x[n-512])
		}
		m.forces[i] = x
	}
	m.lost = make([]bool, frames)
}

// Every random block that is long enough is found and no other, on forces that react to a structure,
// after a decimator, in noise; no start is late.
func TestPeriodicCutterOnAStructure(t *testing.T) {
	for _, noise := range []float64{0, 0.1, 0.3} {
		for _, forces := range []int{1, 3} {
			for _, narrow := range []bool{false, true} {
				t.Run(fmt.Sprintf("noise %v forces %d narrow %v", noise, forces, narrow), func(t *testing.T) {
					testOnAStructure(t, noise, forces, narrow)
				})
			}
		}
	}
}

func testOnAStructure(t *testing.T, noise float64, forces int, narrow bool) {
	const period, settle, keep = 1280, 3, 2
	var errors []int
	missed, wrong, blocks := 0, 0, 0
	for seed := range uint64(4) {
		rng := newRand(seed)
		var counts []int
		total := 0
		for range 14 {
			count := settle + keep
			switch rng.IntN(3) {
			case 0:
				count += rng.IntN(4)
			case 1:
				count -= rng.IntN(3)
			}
			counts = append(counts, count)
			total += count
		}
		m := newMade(forces, total*period)
		changes := m.repeat(rng, 0, period, counts...)
		m.react(0.05, 0.98).smear(0.43)
		sigma := noise
		if narrow { // a force in a tenth of the band, of a tenth of the power
			m.smear(0.05)
			sigma *= math.Sqrt(0.1)
		}
		m.addNoise(rng, sigma)
		found := map[int64]bool{}
		c := NewPeriodicCutter(forces+1, forces, period, settle, keep, 1)
		for _, start := range starts(m.cutAll(c, keep*period)) {
			found[start-settle*period] = true
		}
		for k, change := range changes[1:] {
			if counts[k+1] < settle+keep {
				continue
			}
			blocks++
			hit := int64(-1)
			for start := range found {
				if start > int64(change-period/8) && start < int64(change+period/8) {
					hit = start
				}
			}
			if hit < 0 {
				missed++
				continue
			}
			delete(found, hit)
			errors = append(errors, int(hit)-change)
		}
		for start := range found {
			if start >= period/8 { // the first one may or may not be seen
				wrong++
			}
		}
	}
	least, median, most := spread(errors)
	t.Logf("blocks start %d, %d, %d frames from the change (earliest, median, latest), %d of %d missed, %d false", least, median, most, missed, blocks, wrong)
	latest := 0
	if narrow && noise > 0.2 {
		latest = 8 // 128 independent values a period: the margin no longer covers all
	}
	if least < -80 || most > latest || missed > blocks/20 || wrong > 0 {
		t.Errorf("want none later than %d, none more than 80 frames early, one in twenty missed at most and none false", latest)
	}
}

// Without settling periods a block starts where the random block does.
func TestPeriodicCutterWithoutSettling(t *testing.T) {
	const period, keep = 600, 3
	m := newMade(2, 30*period)
	changes := m.repeat(newRand(1), 0, period, 5, 3, 3, 4, 3, 3, 3, 3, 3)
	m.addNoise(newRand(2), 0.1)
	var want []int64
	for _, c := range changes[1:] {
		want = append(want, int64(c))
	}
	got := starts(m.cutAll(NewPeriodicCutter(3, 2, period, 0, keep, 1), keep*period))
	if !nearly(got, want, 3, 3) {
		t.Errorf("blocks start at %v, want %v", got, want)
	}
}

func TestPeriodicCutterKeepsItsContract(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		period := rapid.IntRange(1, 300).Draw(t, "period")
		settle := rapid.IntRange(0, 3).Draw(t, "settle")
		keep := rapid.IntRange(2, 3).Draw(t, "keep")
		rng := newRand(rapid.Uint64().Draw(t, "seed"))
		var counts []int
		for range 6 {
			counts = append(counts, settle+keep+rng.IntN(3)-rng.IntN(2))
		}
		m := newMade(2, 6*(settle+keep)*period)
		m.repeat(rng, -rng.IntN(2*period), period, counts...)
		m.addNoise(rng, rapid.SampledFrom([]float64{0, 0.1, 0.3}).Draw(t, "noise"))
		if rapid.Bool().Draw(t, "lost") {
			at := rng.IntN(len(m.lost))
			m.lose(at, min(len(m.lost), at+rng.IntN(2*period)))
		}
		if rapid.Bool().Draw(t, "stop") {
			m.scale(rng.IntN(len(m.lost)), len(m.lost), 0)
		}
		checkContract(t, m, keep*period, func() blockCutter { return NewPeriodicCutter(3, 2, period, settle, keep, 1) })
	})
}

func TestPeriodicCutterPanics(t *testing.T) {
	for name, make := range map[string]func(){
		"forces":     func() { NewPeriodicCutter(2, 3, 10, 1, 2, 1) },
		"period":     func() { NewPeriodicCutter(2, 1, 0, 1, 2, 1) },
		"settle":     func() { NewPeriodicCutter(2, 1, 10, -1, 2, 1) },
		"keep":       func() { NewPeriodicCutter(2, 1, 10, 1, 1, 1) },
		"decimation": func() { NewPeriodicCutter(2, 1, 10, 1, 2, 0) },
		"not full":   func() { NewPeriodicCutter(2, 1, 10, 1, 2, 1).Advance() },
		"no block":   func() { NewPeriodicCutter(2, 1, 10, 1, 2, 1).CopyTo(nil) },
		"half frame": func() { NewPeriodicCutter(2, 1, 10, 1, 2, 1).Put([]float64{1}, false) },
	} {
		t.Run(name, func(t *testing.T) { wantPanic(t, make) })
	}
}

func TestPeriodicCutterAllocatesNothing(t *testing.T) {
	const period = 512
	m := newMade(2, 40*period)
	m.repeat(newRand(1), 0, period, 5, 5, 5, 5, 5, 5, 5, 5)
	wantNoAllocations(t, m, 2*period, NewPeriodicCutter(3, 2, period, 2, 2, 1))
}

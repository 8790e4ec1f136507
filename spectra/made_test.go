package spectra

import (
	"math"
	"math/rand/v2"
)

// A made stream: forces channel by channel, all of one length, and which frames are lost.
type made struct {
	forces [][]float64
	lost   []bool
}

func newMade(forces, frames int) *made {
	m := &made{lost: make([]bool, frames)}
	for range forces {
		m.forces = append(m.forces, make([]float64, frames))
	}
	return m
}

// lose makes frames lost ones.
func (m *made) lose(from, before int) {
	for n := from; n < before; n++ {
		m.lost[n] = true
		for _, x := range m.forces {
			x[n] = 0
		}
	}
}

// addNoise adds normal noise of a standard deviation to all forces.
func (m *made) addNoise(rng *rand.Rand, sigma float64) *made {
	for _, x := range m.forces {
		for n := range x {
			x[n] += sigma * rng.NormFloat64()
		}
	}
	return m
}

// react makes each force what it is on a structure with a resonance of a few lines' width: it drops
// out there and rings on.
func (m *made) react(frequency, radius float64) *made {
	for i, x := range m.forces {
		w := 2 * math.Pi * frequency * (1 + 0.2*float64(i))
		notch(x, w, 0.5+0.5*radius, radius)
	}
	return m
}

// notch passes x through zeros of radius zero and poles of radius pole, both at angle w.
func notch(x []float64, w, zero, pole float64) {
	var x1, x2, y1, y2 float64
	for n, v := range x {
		y := v - 2*zero*math.Cos(w)*x1 + zero*zero*x2 + 2*pole*math.Cos(w)*y1 - pole*pole*y2
		x1, x2, y1, y2 = v, x1, y, y1
		x[n] = y
	}
}

// smear passes each force through a linear-phase lowpass, as a decimator does.
func (m *made) smear(band float64) *made {
	const half = 24
	var h [2*half + 1]float64
	for k := range h {
		t := float64(k - half)
		h[k] = 2 * band * (0.5 + 0.5*math.Cos(math.Pi*t/(half+1)))
		if t != 0 {
			h[k] *= math.Sin(2*math.Pi*band*t) / (2 * math.Pi * band * t)
		}
	}
	for _, x := range m.forces {
		from := append(append(make([]float64, half), x...), make([]float64, half)...)
		for n := range x {
			x[n] = 0
			for k, v := range h {
				x[n] += v * from[n+k]
			}
		}
	}
	return m
}

// frames is the stream, channel fastest, with one response behind the forces that numbers the frames.
func (m *made) frames() []float64 {
	q := len(m.forces)
	out := make([]float64, 0, (q+1)*len(m.lost))
	for n := range m.lost {
		for _, x := range m.forces {
			out = append(out, x[n])
		}
		out = append(out, float64(n))
	}
	return out
}

// A cutBlock is a block as it came out.
type cutBlock struct {
	index, start int64
	samples      []float64
}

// cutAll feeds the stream in portions (in turn) and returns the blocks of size samples.
func (m *made) cutAll(c blockCutter, size int, portions ...int) []cutBlock {
	if len(portions) == 0 {
		portions = []int{1000}
	}
	channels := len(m.forces) + 1
	frames := m.frames()
	var blocks []cutBlock
	for at, turn := 0, 0; at < len(m.lost); turn++ {
		before := min(at+portions[turn%len(portions)], len(m.lost))
		for n := at; n < before; n++ {
			if m.lost[n] != m.lost[at] {
				before = n
			}
		}
		for part := frames[at*channels : before*channels]; len(part) > 0; {
			part = part[c.Put(part, m.lost[at]):]
			for c.Full() {
				b := cutBlock{c.Index(), c.Start(), make([]float64, size*channels)}
				c.CopyTo(b.samples)
				blocks = append(blocks, b)
				c.Advance()
			}
		}
		at = before
	}
	return blocks
}

// starts are where blocks start.
func starts(blocks []cutBlock) []int64 {
	var out []int64
	for _, b := range blocks {
		out = append(out, b.start)
	}
	return out
}

// newRand is a generator with a fixed seed.
func newRand(seed uint64) *rand.Rand { return rand.New(rand.NewPCG(seed, 1)) }

// bursts adds normal noise to the forces in the frames from each onset on, of the given length.
func (m *made) bursts(rng *rand.Rand, onsets []int, length int) *made {
	for _, at := range onsets {
		for _, x := range m.forces {
			for n := max(at, 0); n < min(at+length, len(x)); n++ {
				x[n] = rng.NormFloat64()
			}
		}
	}
	return m
}

// every are whole frames at or behind first + k period before end.
func every(first, period float64, end int) []int {
	var out []int
	for k := 0; ; k++ {
		at := int(math.Ceil(first + float64(k)*period))
		if at >= end {
			return out
		}
		out = append(out, at)
	}
}

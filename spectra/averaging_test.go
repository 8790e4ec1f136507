package spectra

import (
	"math"
	"math/cmplx"
	"testing"
)

// list averages some transformed blocks by the definition: Σ w product / Σ w, line by line, where a
// and b choose channels.
func list(blocks [][]complex128, weights []float64, scale float64, at, a, b int) complex128 {
	var sum complex128
	var total float64
	for n, block := range blocks {
		sum += complex(weights[n], 0) * block[at+a] * cmplx.Conj(block[at+b])
		total += weights[n]
	}
	return sum * complex(scale/total, 0)
}

// checkDensities compares all of d with the averages of a list of blocks.
func checkDensities(t *testing.T, what string, b *bench, d Densities, blocks [][]complex128, weights []float64) {
	t.Helper()
	s := b.average.Shape()
	q, p, channels := s.Forces, s.Responses, s.Channels()
	const tolerance = 1e-12 // rounding of sums of some thirty terms
	near := func(got, want complex128) {
		t.Helper()
		if !(cmplx.Abs(got-want) <= tolerance) {
			t.Errorf("%s: %v, want %v", what, got, want)
		}
	}
	for k, scale := range b.average.scale {
		at := k * channels
		for i := range q {
			for j := range q {
				near(d.Gxx[(k*q+i)*q+j], list(blocks, weights, scale, at, i, j))
			}
		}
		for o := range p {
			for i := range q {
				near(d.Gyx[(k*p+o)*q+i], list(blocks, weights, scale, at, q+o, i))
			}
			near(complex(d.Gyy[k*p+o], 0), list(blocks, weights, scale, at, q+o, q+o))
		}
		for n, pair := range b.averaging.Pairs {
			near(d.GyyPairs[k*len(b.averaging.Pairs)+n], list(blocks, weights, scale, at, q+pair[0], q+pair[1]))
		}
	}
}

func lines(blocks []*Block) (list [][]complex128) {
	for _, b := range blocks {
		list = append(list, b.Lines)
	}
	return list
}

func equal(n int) []float64 {
	w := make([]float64, n)
	for i := range w {
		w[i] = 1
	}
	return w
}

var averagingShape = Shape{Lines: 9, Forces: 2, Responses: 3}

// A block weighs (1 - 1/memory)^age.
func TestExponentialAverage(t *testing.T) {
	b := newBenchOf(t, Averaging{Memory: 4, Pairs: [][2]int{{0, 2}}}, averagingShape, 16, 11, 1)
	s := b.run([]int{3})
	weights := make([]float64, 11)
	for i := range weights {
		weights[i] = math.Pow(0.75, float64(10-i))
	}
	checkDensities(t, "memory 4", b, s.Densities, lines(b.blocks), weights)
}

// The first part and the rest are averages of their own lists, and neither is below a third.
func TestHalves(t *testing.T) {
	wantFirst := map[int]int{1: 0, 2: 1, 3: 2, 4: 2, 5: 2, 6: 4, 7: 4, 8: 4, 9: 4, 11: 4, 12: 8, 15: 8, 16: 8, 23: 8, 24: 16}
	for n := 1; n <= 24; n++ {
		b := newBenchOf(t, Averaging{Halves: true, Pairs: [][2]int{{1, 2}}}, averagingShape, 16, n, 1)
		s := b.run([]int{5})
		first := s.Early.Averages
		if want, ok := wantFirst[n]; ok && first != want {
			t.Errorf("%d blocks: the first part has %d, want %d", n, first, want)
		}
		if s.Late.Averages != n-first {
			t.Errorf("%d blocks: parts of %d and %d", n, first, s.Late.Averages)
		}
		if n == 1 {
			continue
		}
		if 3*first < n || 3*s.Late.Averages < n {
			t.Errorf("%d blocks: parts of %d and %d", n, first, s.Late.Averages)
		}
		if got := s.Early.EffectiveAverages + s.Late.EffectiveAverages; math.Abs(got-s.EffectiveAverages) > 1e-12*got {
			t.Errorf("%d blocks: the parts are worth %v together, all %v", n, got, s.EffectiveAverages)
		}
		checkDensities(t, "early", b, s.Early.Densities, lines(b.blocks[:first]), equal(first))
		checkDensities(t, "late", b, s.Late.Densities, lines(b.blocks[first:]), equal(n-first))
	}
}

// Lines are the mean of the periods' transforms, and the noise is their unbiased scatter.
func TestPeriodicAverage(t *testing.T) {
	const n, periods = 16, 3
	b := newBenchOf(t, Averaging{Periods: periods}, averagingShape, n, 4, 2)
	s := b.run([]int{2})
	window := Hann.Values(n)
	transform := NewTransform(window)
	channels := averagingShape.Channels()
	var deviations [][]complex128
	for _, block := range b.blocks {
		mean := make([]complex128, len(block.Lines))
		all := make([][]complex128, periods)
		for k := range all {
			all[k] = make([]complex128, len(mean))
			for ch := range channels {
				transform.ChannelTo(all[k], ch, channels, block.Samples[ch*periods*n+k*n:][:n])
			}
			for i, v := range all[k] {
				mean[i] += v / periods
			}
		}
		for i, v := range mean {
			if cmplx.Abs(block.Lines[i]-v) > 1e-12 {
				t.Fatalf("mean of the periods %v, want %v", block.Lines[i], v)
			}
			for k := range all {
				all[k][i] -= v
			}
		}
		deviations = append(deviations, all...)
	}
	checkDensities(t, "mean", b, s.Densities, lines(b.blocks), equal(len(b.blocks)))
	// Σ D D* over blocks (K - 1): the mean over all periods times K/(K - 1).
	weights := equal(len(deviations))
	for k := range b.average.scale {
		b.average.scale[k] *= periods / (periods - 1.0)
	}
	checkDensities(t, "noise", b, s.Noise, deviations, weights)
}

func TestEngineAllocatesNothing(t *testing.T) {
	for name, averaging := range averagings {
		b := newBenchOf(t, averaging, averagingShape, 64, 4, 2)
		b.engine.Transform(b.blocks)
		b.engine.Add(b.blocks)
		start := b.blocks[3].Start
		if n := testing.AllocsPerRun(50, func() {
			for _, block := range b.blocks {
				start += 32
				block.Start = start
			}
			b.engine.Transform(b.blocks)
			b.engine.Add(b.blocks)
		}); n != 0 {
			t.Errorf("%s: %v allocations a batch, want none", name, n)
		}
	}
}

package spectra

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// A bench is an engine with everything that belongs to it.
type bench struct {
	averaging Averaging
	average   *Average
	engine    *Engine
	blocks    []*Block
}

// newBench makes an engine for blocks of n samples with made-up noise in them, Hann, half
// overlapped, 1024 samples/s.
func newBench(t testing.TB, shape Shape, n, blocks, workers int) *bench {
	return newBenchOf(t, Averaging{}, shape, n, blocks, workers)
}

func newBenchOf(t testing.TB, averaging Averaging, shape Shape, n, blocks, workers int) *bench {
	window := Hann.Values(n)
	w := NewWorkers(workers)
	t.Cleanup(w.Close)
	b := &bench{averaging: averaging, average: NewAverage(shape, window, n/2, 1, 1024, averaging)}
	b.engine = NewEngine(b.average, window, w)
	rng := rand.New(rand.NewPCG(3, 4))
	for k := range blocks {
		block := NewBlock(shape, n, averaging.Periods)
		block.Index, block.Start = int64(k), int64(k*n/2)
		for i := range block.Samples {
			block.Samples[i] = rng.NormFloat64()
		}
		b.blocks = append(b.blocks, block)
	}
	return b
}

// run puts the blocks through the engine in batches of the given sizes.
func (b *bench) run(batches []int) *Snapshot {
	rest := b.blocks
	for i := 0; len(rest) > 0; i++ {
		n := min(batches[i%len(batches)], len(rest))
		b.engine.Transform(rest[:n])
		b.engine.Add(rest[:n])
		rest = rest[n:]
	}
	s := NewSnapshot(b.average.Shape(), b.averaging)
	b.average.SnapshotTo(s)
	return s
}

func sameBits(a, b *Snapshot) bool {
	complexBits := func(x, y complex128) bool {
		return math.Float64bits(real(x)) == math.Float64bits(real(y)) && math.Float64bits(imag(x)) == math.Float64bits(imag(y))
	}
	floatBits := func(x, y float64) bool { return math.Float64bits(x) == math.Float64bits(y) }
	same := func(a, b Densities) bool {
		return slices.EqualFunc(a.Gxx, b.Gxx, complexBits) && slices.EqualFunc(a.Gyx, b.Gyx, complexBits) &&
			slices.EqualFunc(a.Gyy, b.Gyy, floatBits) && slices.EqualFunc(a.GyyPairs, b.GyyPairs, complexBits)
	}
	return same(a.Densities, b.Densities) && same(a.Noise, b.Noise) && same(a.Early.Densities, b.Early.Densities) &&
		same(a.Late.Densities, b.Late.Densities) && a.EffectiveAverages == b.EffectiveAverages
}

// averagings are one of each kind.
var averagings = map[string]Averaging{
	"plain":    {},
	"memory":   {Memory: 5, Pairs: [][2]int{{0, 2}}},
	"halves":   {Halves: true, Pairs: [][2]int{{0, 1}, {1, 2}}},
	"periodic": {Halves: true, Periods: 3},
}

func TestSameBitsOnAnyNumberOfWorkersAndBatches(t *testing.T) {
	shape := Shape{Lines: 70, Forces: 2, Responses: 3}
	for name, averaging := range averagings {
		t.Run(name, func(t *testing.T) {
			want := newBenchOf(t, averaging, shape, 240, 23, 1).run([]int{1})
			for _, workers := range []int{1, 2, 3, 8} {
				for _, batches := range [][]int{{1}, {23}, {2, 5, 1}} {
					if got := newBenchOf(t, averaging, shape, 240, 23, workers).run(batches); !sameBits(got, want) {
						t.Errorf("%d workers, batches of %v: other bits than one block at a time on one", workers, batches)
					}
				}
			}
		})
	}
}

// TestAverageOfListEqualsRunning computes the densities of the listed blocks at once, by the
// definition: a discrete Fourier sum and the mean of the products.
func TestAverageOfListEqualsRunning(t *testing.T) {
	const n, rateHz = 30, 1024.0
	shape := Shape{Lines: n/2 + 1, Forces: 2, Responses: 1} // up to half the rate
	b := newBench(t, shape, n, 5, 2)
	s := b.run([]int{2})
	window := Hann.Values(n)
	dft := func(block *Block, ch, k int) complex128 {
		var sum complex128
		for i, w := range window {
			sum += complex(w*block.Samples[ch*n+i], 0) * cmplx.Rect(1, -2*math.Pi*float64(k*i%n)/n)
		}
		return sum
	}
	density := func(k, a, b2 int) complex128 {
		var sum complex128
		for _, block := range b.blocks {
			sum += dft(block, a, k) * cmplx.Conj(dft(block, b2, k))
		}
		scale := 2 / (rateHz * sumOfSquares(window) * float64(len(b.blocks)))
		if k == 0 || k == n/2 {
			scale /= 2
		}
		return sum * complex(scale, 0)
	}
	const tolerance = 1e-12 // rounding of sums of some thirty terms
	for k := range shape.Lines {
		for i := range 2 {
			for j := range 2 {
				if got, want := s.Gxx[(k*2+i)*2+j], density(k, i, j); cmplx.Abs(got-want) > tolerance {
					t.Errorf("line %d Gxx[%d,%d] = %v, want %v", k, i, j, got, want)
				}
			}
			if got, want := s.Gyx[k*2+i], density(k, 2, i); cmplx.Abs(got-want) > tolerance {
				t.Errorf("line %d Gyx[0,%d] = %v, want %v", k, i, got, want)
			}
		}
		if got, want := s.Gyy[k], real(density(k, 2, 2)); math.Abs(got-want) > tolerance {
			t.Errorf("line %d Gyy[0] = %v, want %v", k, got, want)
		}
	}
	if got := slices.Collect(s.Starts.All()); !slices.Equal(got, []int64{0, 15, 30, 45, 60}) {
		t.Errorf("list of blocks %v", got)
	}
}

// TestPower is Parseval's theorem: the densities summed over all lines are the mean square of white
// noise of variance 1, to its scatter.
func TestPower(t *testing.T) {
	const n = 256
	b := newBench(t, Shape{Lines: n/2 + 1, Forces: 1, Responses: 1}, n, 400, 2)
	s := b.run([]int{16})
	var sum float64
	for _, g := range s.Gyy {
		sum += g * s.SpacingHz
	}
	// 400 half-overlapped blocks hold about 51,000 independent samples: 2 % is three deviations.
	if math.Abs(sum-1) > 0.02 {
		t.Errorf("mean square %.4f, want 1", sum)
	}
}

func TestSilentChannelStaysSilent(t *testing.T) {
	const n = 96
	shape := Shape{Lines: 40, Forces: 2, Responses: 2}
	b := newBench(t, shape, n, 6, 2)
	for _, block := range b.blocks {
		clear(block.Samples[1*n : 2*n])
		clear(block.Samples[3*n : 4*n])
	}
	s := b.run([]int{3})
	for k := range shape.Lines {
		for _, v := range []complex128{s.Gxx[k*4+1], s.Gxx[k*4+2], s.Gxx[k*4+3], s.Gyx[k*4+1], s.Gyx[k*4+2], s.Gyx[k*4+3]} {
			if v != 0 {
				t.Fatalf("line %d: a silent channel has the product %v", k, v)
			}
		}
		if s.Gyy[k*2+1] != 0 {
			t.Fatalf("line %d: a silent response has the density %v", k, s.Gyy[k*2+1])
		}
	}
}

func TestScalingAForceByAPowerOfTwo(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		shape := Shape{Lines: 20, Forces: 2, Responses: 1}
		exponent := rapid.IntRange(-30, 30).Draw(rt, "exponent")
		c := math.Ldexp(1, exponent)
		want := newBench(t, shape, 64, 4, 1).run([]int{4})
		scaled := newBench(t, shape, 64, 4, 1)
		for _, block := range scaled.blocks {
			for i := range 64 {
				block.Samples[i] *= c
			}
		}
		got := scaled.run([]int{4})
		for k := range shape.Lines {
			if got.Gxx[k*4] != want.Gxx[k*4]*complex(c*c, 0) || got.Gyx[k*2] != want.Gyx[k*2]*complex(c, 0) {
				rt.Fatalf("line %d: scaling by 2^%d is not exact", k, exponent)
			}
		}
	})
}

func TestEmptyAverageIsUnknown(t *testing.T) {
	b := newBench(t, Shape{Lines: 3, Forces: 1, Responses: 1}, 16, 0, 1)
	s := b.run([]int{1})
	if !math.IsNaN(s.Gyy[1]) || !cmplx.IsNaN(s.Gxx[1]) || !cmplx.IsNaN(s.Gyx[1]) || s.EffectiveAverages != 0 {
		t.Errorf("densities %v %v %v worth %v without any block", s.Gxx[1], s.Gyx[1], s.Gyy[1], s.EffectiveAverages)
	}
}

func BenchmarkEngine(b *testing.B) {
	for _, size := range []struct {
		name string
		q, p int
	}{{"2x6", 2, 6}, {"4x60", 4, 60}} {
		b.Run(size.name, func(b *testing.B) {
			const n = 4096
			shape := Shape{Lines: 1601, Forces: size.q, Responses: size.p}
			bench := newBench(b, shape, n, 8, 2)
			start := int64(1 << 40)
			for b.Loop() {
				for _, block := range bench.blocks {
					start += n / 2
					block.Start = start
				}
				bench.engine.Transform(bench.blocks)
				bench.engine.Add(bench.blocks)
			}
			samples := float64(b.N) * 8 * n / 2 * float64(shape.Channels())
			b.ReportMetric(samples/b.Elapsed().Seconds()/1e6, "Msamples/s")
		})
	}
}

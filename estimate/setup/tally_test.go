package setup

import (
	"math"
	"math/big"
	"math/rand/v2"
	"reflect"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// noise are frames of madeRig, about a tenth of full scale.
func noiseFrames(seed uint64, frames int) []float64 {
	rng := rand.New(rand.NewPCG(seed, 3))
	list := make([]float64, frames*madeChannels)
	for i := range list {
		list[i] = 0.1 * rng.NormFloat64()
	}
	return list
}

func tallyOf(t testing.TB, frames []float64) *Tally {
	tally := NewTally(parseRig(t, madeRig))
	tally.Add(frames)
	return tally
}

// column puts values into channel ch of silent frames.
func column(ch int, values ...float64) []float64 {
	list := make([]float64, len(values)*madeChannels)
	for n, v := range values {
		list[n*madeChannels+ch] = v
	}
	return list
}

func TestTallyDoesNotDependOnTheCut(t *testing.T) {
	const frames = 9000 // two stretches and a part
	all := noiseFrames(1, frames)
	want := tallyOf(t, all)
	rapid.Check(t, func(rt *rapid.T) {
		got := NewTally(parseRig(t, madeRig))
		for rest := all; len(rest) > 0; {
			n := min(rapid.IntRange(0, 3000).Draw(rt, "frames")*madeChannels, len(rest))
			got.Add(rest[:n])
			rest = rest[n:]
		}
		if !reflect.DeepEqual(got, want) {
			rt.Error("other bits than in one call")
		}
	})
}

// TestTallyAgainstExactSums compares with sums of unlimited precision, for channels that lie far from 0
// too.
func TestTallyAgainstExactSums(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		offset := rapid.SampledFrom([]float64{0, 0.5, -0.999, 1e-9}).Draw(rt, "offset")
		spread := rapid.SampledFrom([]float64{1e-7, 1e-4, 0.3}).Draw(rt, "spread")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(rt, "seed"), 1))
		values := make([]float64, rapid.IntRange(1, 10000).Draw(rt, "frames"))
		sum, squares := new(big.Float).SetPrec(300), new(big.Float).SetPrec(300)
		lowest, highest := math.Inf(1), math.Inf(-1)
		for i := range values {
			v := offset + spread*rng.NormFloat64()
			values[i] = v
			lowest, highest = min(lowest, v), max(highest, v)
			exact := new(big.Float).SetPrec(300).SetFloat64(v)
			sum.Add(sum, exact)
			squares.Add(squares, exact.Mul(exact, exact))
		}
		tally := tallyOf(t, column(chA3z, values...))
		n := big.NewFloat(float64(len(values)))
		mean, _ := sum.Quo(sum, n).Float64()
		meanSquare, _ := squares.Quo(squares, n).Float64()
		const tolerance = 1e-13 // of the largest value: some hundred roundings
		size := math.Abs(offset) + spread
		if got := tally.Mean(chA3z); math.Abs(got-mean) > tolerance*size {
			rt.Errorf("mean %v, want %v", got, mean)
		}
		if got := tally.MeanSquare(chA3z); math.Abs(got-meanSquare) > tolerance*size*size {
			rt.Errorf("mean square %v, want %v", got, meanSquare)
		}
		if lo, hi := tally.Range(chA3z); lo != lowest || hi != highest {
			rt.Errorf("range %v to %v, want %v to %v", lo, hi, lowest, highest)
		}
	})
}

// TestVarianceOfATinySignal is what sums of squares around 0 would lose: 1e-7 beside 1.
func TestVarianceOfATinySignal(t *testing.T) {
	values := make([]float64, 10000)
	for i := range values {
		values[i] = 0.75 + 1e-8*float64(i%2*2-1)
	}
	tally := tallyOf(t, column(chS1, values...))
	c := &tally.channels[chS1]
	shift := (c.sum + c.stretchSum) / 1e4
	// Values next to 0.75 are 1.1e-16 apart, so a deviation of 1e-8 is good to 1e-8 of itself.
	if variance := (c.squares+c.stretchOfSquares)/1e4 - shift*shift; math.Abs(variance/1e-16-1) > 1e-7 {
		t.Errorf("variance %v, want 1e-16", variance)
	}
}

func TestTallyWithoutFrames(t *testing.T) {
	tally := tallyOf(t, nil)
	lo, hi := tally.Range(chS1)
	for _, v := range []float64{lo, hi, tally.Mean(chS1), tally.MeanSquare(chS1)} {
		if !math.IsNaN(v) {
			t.Errorf("%v without frames, want NaN", v)
		}
	}
	if tally.Constant(chS1) || tally.Identical() != nil || tally.Twins() != nil || tally.Frames() != 0 || tally.Channels() != madeChannels {
		t.Error("an empty tally says something of its channels")
	}
}

func TestConstant(t *testing.T) {
	for _, test := range []struct {
		name   string
		values []float64
		want   bool
	}{
		{"one frame", []float64{0.5}, false},
		{"two the same", []float64{0.5, 0.5}, true},
		{"zeros of both signs", []float64{0, math.Copysign(0, -1), 0}, true},
		{"one differs at the end", []float64{0.5, 0.5, 0.5, 0.25}, false},
		{"one differs at the start", []float64{0.25, 0.5, 0.5, 0.5}, false},
		{"not a number", []float64{math.NaN(), math.NaN()}, false},
	} {
		if got := tallyOf(t, column(chA1z, test.values...)).Constant(chA1z); got != test.want {
			t.Errorf("%s: constant is %v", test.name, got)
		}
	}
}

func TestLongestRuns(t *testing.T) {
	for _, test := range []struct {
		name            string
		values          []float64
		lowest, highest int64
	}{
		{"one frame", []float64{0.5}, 1, 1},
		{"constant", []float64{0.5, 0.5, 0.5}, 3, 3},
		{"highest twice", []float64{0, 0.5, 0.5, 0, 0.5, 0.5, 0.5, 0}, 1, 3},
		{"a higher one makes the run a new one", []float64{0, 0.5, 0.5, 0.5, 0.6, 0}, 1, 1},
		{"a run in the middle is none", []float64{-1, 0.2, 0.2, 0.2, 0.2, 1, 1}, 1, 2},
		{"lowest", []float64{0, -0.5, -0.5, 0.1, -0.5}, 2, 1},
	} {
		tally := tallyOf(t, column(chA1z, test.values...))
		if lowest, highest := tally.LongestRuns(chA1z); lowest != test.lowest || highest != test.highest {
			t.Errorf("%s: runs of %d and %d, want %d and %d", test.name, lowest, highest, test.lowest, test.highest)
		}
	}
}

// TestAtLimit is the formats' rule to the last step: |digital*full_scale| >= limit*(1-2^-15).
func TestAtLimit(t *testing.T) {
	r := parseRig(t, strings.Replace(madeRig, "name = \"A1z\"", "name = \"A1z\"\nlimit = 5.0", 1))
	edge := 0.5 * (1 - 0x1p-15)
	tally := NewTally(r)
	tally.Add(column(chA1z, edge, math.Nextafter(edge, 0), -edge, 1, -1, math.Nextafter(-edge, 0), 0))
	if got := tally.AtLimit(chA1z); got != 4 {
		t.Errorf("%d samples at the limit, want 4", got)
	}
	if got := tally.AtLimit(chA2z); got != 0 {
		t.Errorf("%d samples of a silent channel at the limit", got)
	}
}

func TestIdentical(t *testing.T) {
	made := func(change func(frame []float64, n int)) [][]int {
		frames := noiseFrames(4, 5000)
		for n := range 5000 {
			change(frames[n*madeChannels:][:madeChannels], n)
		}
		return tallyOf(t, frames).Identical()
	}
	for _, test := range []struct {
		name   string
		change func(frame []float64, n int)
		want   [][]int
	}{
		{"none", func([]float64, int) {}, nil},
		{"two", func(f []float64, _ int) { f[5] = f[2] }, [][]int{{2, 5}}},
		{"two groups", func(f []float64, _ int) { f[5], f[4], f[6], f[1] = f[2], f[0], f[0], f[2] }, [][]int{{0, 4, 6}, {1, 2, 5}}},
		{"one sample differs by a bit", func(f []float64, n int) {
			f[5] = f[2]
			if n == 17 {
				f[5] = math.Nextafter(f[5], 1)
			}
		}, nil},
		{"signs of two samples differ", func(f []float64, n int) {
			f[5] = f[2]
			if n == 17 || n == 18 {
				f[5] = -f[5]
			}
		}, nil},
		{"opposite", func(f []float64, _ int) { f[5] = -f[2] }, nil},
		{"two samples change places", func(f []float64, n int) {
			if n == 17 {
				f[2], f[5] = 0.01, 0.02
			} else if n == 18 {
				f[2], f[5] = 0.02, 0.01
			} else {
				f[5] = f[2]
			}
		}, nil},
		{"zeros of both signs", func(f []float64, n int) {
			f[5] = f[2]
			if n%3 == 0 {
				f[2], f[5] = 0, math.Copysign(0, -1)
			}
		}, [][]int{{2, 5}}},
		{"dead ones are not the same", func(f []float64, _ int) { f[2], f[5] = 0, 0 }, nil},
	} {
		if got := made(test.change); !reflect.DeepEqual(got, test.want) {
			t.Errorf("%s: %v, want %v", test.name, got, test.want)
		}
	}
}

func TestTallyReset(t *testing.T) {
	frames := noiseFrames(5, 5000)
	want := tallyOf(t, frames)
	got := tallyOf(t, noiseFrames(6, 7000))
	got.Reset()
	got.Add(frames)
	if !reflect.DeepEqual(got, want) {
		t.Error("after Reset a tally differs from a new one")
	}
}

func TestTallyRefusesPartOfAFrame(t *testing.T) {
	defer func() {
		if recover() != "setup: tally got a part of a frame" {
			t.Error("a part of a frame did not panic")
		}
	}()
	tallyOf(t, make([]float64, madeChannels+1))
}

func TestTallyAllocatesNothing(t *testing.T) {
	tally, frames := tallyOf(t, nil), noiseFrames(7, 700)
	before := cap(tally.kept.frames)
	if allocs := testing.AllocsPerRun(50, func() { tally.Add(frames) }); allocs != 0 {
		t.Errorf("%v allocations a call, want none", allocs)
	}
	if got := cap(tally.kept.frames); got != before || len(tally.kept.frames) != keptFrames*madeChannels {
		t.Errorf("room for %d samples after %d frames, %d before", got, tally.Frames(), before)
	}
}

func BenchmarkTally(b *testing.B) {
	for _, channels := range []int{8, 64, 512} {
		b.Run(benchName(channels), func(b *testing.B) {
			tally := NewTally(wideRig(b, channels))
			rng := rand.New(rand.NewPCG(1, 1))
			frames := make([]float64, 1024*channels)
			for i := range frames {
				frames[i] = 0.1 * rng.NormFloat64()
			}
			for b.Loop() {
				tally.Add(frames)
			}
			perSample := b.Elapsed().Seconds() / float64(b.N) / float64(len(frames))
			b.ReportMetric(perSample*1e9, "ns/sample")
			b.ReportMetric(100*perSample*48000*float64(channels), "%core@48kHz")
		})
	}
}

// BenchmarkTwins is the cost of comparing all pairs, once a stage.
func BenchmarkTwins(b *testing.B) {
	for _, channels := range []int{64, 512} {
		b.Run(benchName(channels), func(b *testing.B) {
			tally := NewTally(wideRig(b, channels))
			rng := rand.New(rand.NewPCG(1, 1))
			frames := make([]float64, 2048*channels)
			for i := range frames {
				frames[i] = rng.NormFloat64()
			}
			tally.Add(frames)
			for b.Loop() {
				tally.Twins()
			}
		})
	}
}

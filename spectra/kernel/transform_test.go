package kernel

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"
	"slices"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"
	"pgregory.net/rapid"
)

// smooth are all lengths 2^a 3^b 5^c up to most.
func smooth(most int) []int {
	var lengths []int
	for a := 1; a <= most; a *= 2 {
		for b := a; b <= most; b *= 3 {
			for c := b; c <= most; c *= 5 {
				lengths = append(lengths, c)
			}
		}
	}
	slices.Sort(lengths)
	return lengths
}

// all transforms channels in groups into lines of its own.
func all(t *Transform, channels [][]float64) []complex128 {
	dst := make([]complex128, (len(t.window)/2+1)*len(channels))
	for first := 0; first < len(channels); first += Lanes {
		t.ChannelsTo(dst, first, len(channels), channels[first:min(first+Lanes, len(channels))])
	}
	return dst
}

// channelOf are the lines of one channel.
func channelOf(lines []complex128, channel, channels int) []complex128 {
	var one []complex128
	for ; channel < len(lines); channel += channels {
		one = append(one, lines[channel])
	}
	return one
}

func flat(n int) []float64 { return slices.Repeat([]float64{1}, n) }

// norm is the root of the sum of the squared magnitudes.
func norm(x []complex128) float64 {
	var sum float64
	for _, v := range x {
		sum += real(v)*real(v) + imag(v)*imag(v)
	}
	return math.Sqrt(sum)
}

func distance(a, b []complex128) float64 {
	d := make([]complex128, len(a))
	for i := range a {
		d[i] = a[i] - b[i]
	}
	return norm(d)
}

func TestTransformIsGonums(t *testing.T) {
	others := []int{7, 14, 97, 1001, 4099}
	for _, n := range append(smooth(5400), others...) {
		const count = 6 // a full group, and one that is not
		window, channels := noise(n, 1), noises(count, n, 2)
		for name, l := range map[string]*loops{"plain": &plain, "fast": fastest} {
			lines := all(newTransform(window, l), channels)
			for c, samples := range channels {
				windowed := make([]float64, n)
				for i, w := range window {
					windowed[i] = w * samples[i]
				}
				want := fourier.NewFFT(n).Coefficients(nil, windowed)
				// Both have a relative error of some 3e-16: see TestAccuracy.
				if d := distance(channelOf(lines, c, count), want); d > 2e-15*norm(want) {
					t.Errorf("%s, %d samples, channel %d: relative distance %.2g", name, n, c, d/norm(want))
				}
			}
		}
	}
}

func TestTransformsHaveTheSameBits(t *testing.T) {
	needVector(t)
	for _, n := range append(smooth(5400), 8192, 16384, 15625, 65536) {
		window, channels := noise(n, 1), noises(6, n, 2)
		sprinkle(channels[1], uint64(n))
		got, want := all(newTransform(window, fastest), channels), all(newTransform(window, &plain), channels)
		if i := bitsDiffer(got, want); i >= 0 {
			t.Fatalf("%d samples, line %d of channel %d: %v, plain %v", n, i/6, i%6, got[i], want[i])
		}
	}
}

// TestAccuracy compares with the definition in 120 bits. The error of a transform of random data
// grows like the root of log n (Schatzman, SIAM J. Sci. Comput. 17, 1996); gonum's is measured beside it.
func TestAccuracy(t *testing.T) {
	for _, n := range []int{30, 64, 375, 480, 1000} {
		t.Run(fmt.Sprint(n), func(t *testing.T) {
			samples := noise(n, 7)
			want := exactLines(samples)
			own := distance(all(NewTransform(flat(n)), [][]float64{samples}), want) / norm(want)
			gonums := distance(fourier.NewFFT(n).Coefficients(nil, samples), want) / norm(want)
			t.Logf("relative error %.2g, gonum's %.2g", own, gonums)
			if own > 4e-16 {
				t.Errorf("relative error %.2g, want at most 4e-16", own)
			}
		})
	}
}

func exactLines(samples []float64) []complex128 {
	n := len(samples)
	lines := make([]complex128, n/2+1)
	for k := range lines {
		re, im := new(big.Float).SetPrec(120), new(big.Float).SetPrec(120)
		for i, x := range samples {
			// The factors have tests of their own; here it is what becomes of them.
			u := unit(k*i%n, n)
			product := func(factor float64) *big.Float {
				return new(big.Float).SetPrec(120).Mul(big.NewFloat(x), big.NewFloat(factor))
			}
			re.Add(re, product(real(u)))
			im.Add(im, product(imag(u)))
		}
		r, _ := re.Float64()
		i, _ := im.Float64()
		lines[k] = complex(r, i)
	}
	return lines
}

// ownLength draws a length that this package transforms itself. gonum loses two digits at primes.
func ownLength(rt *rapid.T) int { return rapid.SampledFrom(smooth(3000)).Draw(rt, "n") }

func TestTransformIsLinear(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n := ownLength(rt)
		a, b := rapid.Float64Range(-10, 10).Draw(rt, "a"), rapid.Float64Range(-10, 10).Draw(rt, "b")
		channels := noises(3, n, 8)
		for i := range channels[2] {
			channels[2][i] = a*channels[0][i] + b*channels[1][i]
		}
		lines := all(NewTransform(noise(n, 9)), channels)
		x, y, got := channelOf(lines, 0, 3), channelOf(lines, 1, 3), channelOf(lines, 2, 3)
		want := make([]complex128, len(got))
		for k := range want {
			want[k] = complex(a, 0)*x[k] + complex(b, 0)*y[k]
		}
		// Relative to what is added, which may cancel.
		if d := distance(got, want); d > 2e-15*(math.Abs(a)*norm(x)+math.Abs(b)*norm(y)) {
			rt.Fatalf("off by %.2g", d)
		}
	})
}

func TestParseval(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n := ownLength(rt)
		samples := noise(n, 10)
		var want, got float64
		for _, v := range samples {
			want += v * v
		}
		for k, v := range all(NewTransform(flat(n)), [][]float64{samples}) {
			power := (real(v)*real(v) + imag(v)*imag(v)) / float64(n)
			if k > 0 && 2*k < n {
				power *= 2
			}
			got += power
		}
		if math.Abs(got-want) > 4e-15*want {
			rt.Fatalf("%v in the lines, %v in the samples", got, want)
		}
	})
}

// TestDelta: a single sample at place m has the lines e^{-2πikm/n}.
func TestDelta(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n := ownLength(rt)
		m := rapid.IntRange(0, n-1).Draw(rt, "m")
		samples := make([]float64, n)
		samples[m] = 1
		for k, got := range all(NewTransform(flat(n)), [][]float64{samples}) {
			if want := unit(k*m%n, n); cmplx.Abs(got-want) > 2e-15 { // some eight products, each rounded
				rt.Fatalf("line %d is %v, want %v", k, got, want)
			}
		}
	})
}

// TestEdgesAreReal: 0 Hz and half the rate have no imaginary part.
func TestEdgesAreReal(t *testing.T) {
	for _, n := range smooth(3000) {
		lines := all(NewTransform(flat(n)), [][]float64{noise(n, 11)})
		if imag(lines[0]) != 0 {
			t.Errorf("%d samples: line 0 is %v", n, lines[0])
		}
		if n%2 == 0 && imag(lines[n/2]) != 0 {
			t.Errorf("%d samples: line %d is %v", n, n/2, lines[n/2])
		}
	}
}

// TestChannelsAreApart: neither noise, nor a NaN or an infinity, nor silence of one channel reaches
// another, on whatever lane they are.
func TestChannelsAreApart(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n := rapid.OneOf(rapid.SampledFrom(smooth(1000)), rapid.IntRange(1, 300)).Draw(rt, "n")
		count := rapid.IntRange(1, 9).Draw(rt, "channels")
		window := noise(n, 12)
		channels := noises(count, n, 13)
		var alone [][]complex128
		transform := NewTransform(window)
		for _, samples := range channels {
			alone = append(alone, all(transform, [][]float64{samples}))
		}
		spoilt := rapid.IntRange(0, count-1).Draw(rt, "spoilt")
		silent := rapid.IntRange(0, count-1).Draw(rt, "silent")
		channels[spoilt][rapid.IntRange(0, n-1).Draw(rt, "place")] = rapid.SampledFrom([]float64{math.NaN(), math.Inf(1), 1e308}).Draw(rt, "value")
		clear(channels[silent])
		lines := all(transform, channels)
		for c := range channels {
			got := channelOf(lines, c, count)
			switch {
			case c == silent:
				if norm(got) != 0 {
					rt.Fatalf("silent channel %d of %d: %v", c, count, got)
				}
			case c != spoilt:
				if i := bitsDiffer(got, alone[c]); i >= 0 {
					rt.Fatalf("channel %d of %d, line %d: %v, alone %v", c, count, i, got[i], alone[c][i])
				}
			}
		}
	})
}

// TestNaNSpoilsItsChannel: no line of the channel looks as if it were known.
func TestNaNSpoilsItsChannel(t *testing.T) {
	for _, n := range []int{1, 2, 15, 48, 125, 4096, 5400, 77} {
		for _, place := range []int{0, n / 3, n - 1} {
			channels := noises(2, n, 14)
			channels[1][place] = math.NaN()
			for k, v := range channelOf(all(NewTransform(flat(n)), channels), 1, 2) {
				if !math.IsNaN(real(v)) {
					t.Fatalf("%d samples, NaN at %d: line %d is %v", n, place, k, v)
				}
			}
		}
	}
}

func TestScalingByAPowerOfTwoIsExact(t *testing.T) {
	for _, n := range []int{15, 48, 125, 4096} {
		channels := noises(2, n, 15)
		for i, v := range channels[0] {
			channels[1][i] = math.Ldexp(v, -40)
		}
		lines := all(NewTransform(noise(n, 16)), channels)
		for k := 0; k < len(lines); k += 2 {
			if lines[k+1] != lines[k]*complex(math.Ldexp(1, -40), 0) {
				t.Fatalf("%d samples, line %d: %v and %v", n, k/2, lines[k], lines[k+1])
			}
		}
	}
}

// TestFewerLines: what is not asked for is not written, and what is asked for has the same bits.
func TestFewerLines(t *testing.T) {
	for _, n := range []int{1, 15, 48, 77} {
		for count := 1; count <= Lanes; count++ {
			channels := noises(count, n, 17)
			transform := NewTransform(flat(n))
			whole := all(transform, channels)
			const around, mark = 3, 99 // channels that are not written
			for lines := range n/2 + 2 {
				memory := slices.Repeat([]complex128{mark}, (lines+1)*(count+around))
				transform.ChannelsTo(memory[:lines*(count+around)], 1, count+around, channels)
				for i, got := range memory {
					line, c := i/(count+around), i%(count+around)-1
					want := complex128(mark)
					if line < lines && c >= 0 && c < count {
						want = whole[line*count+c]
					}
					if got != want {
						t.Fatalf("%d samples, %d lines of %d channels: line %d of channel %d is %v, want %v", n, lines, count, line, c, got, want)
					}
				}
			}
		}
	}
}

func TestTransformRefusesOtherShapes(t *testing.T) {
	const n = 16
	lines := make([]complex128, 9*5)
	tests := []struct {
		name string
		call func(t *Transform)
	}{
		{"no window", func(*Transform) { NewTransform(nil) }},
		{"no channel", func(t *Transform) { t.ChannelsTo(lines, 0, 5, nil) }},
		{"five channels", func(t *Transform) { t.ChannelsTo(lines, 0, 5, noises(5, n, 1)) }},
		{"first before all", func(t *Transform) { t.ChannelsTo(lines, -1, 5, noises(1, n, 1)) }},
		{"beyond the last", func(t *Transform) { t.ChannelsTo(lines, 2, 5, noises(4, n, 1)) }},
		{"part of a line", func(t *Transform) { t.ChannelsTo(lines[:44], 0, 5, noises(4, n, 1)) }},
		{"too many lines", func(t *Transform) { t.ChannelsTo(make([]complex128, 10*5), 0, 5, noises(4, n, 1)) }},
		{"short channel", func(t *Transform) { t.ChannelsTo(lines, 0, 5, [][]float64{noise(n, 1), noise(n-1, 1)}) }},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("no panic")
				}
			}()
			test.call(NewTransform(flat(n)))
		})
	}
}

func TestTransformAllocatesNothing(t *testing.T) {
	for _, n := range []int{4096, 3375, 77} {
		transform, channels := NewTransform(flat(n)), noises(7, n, 18)
		dst := make([]complex128, n/3*7)
		allocs := testing.AllocsPerRun(5, func() {
			transform.ChannelsTo(dst, 0, 7, channels[:4])
			transform.ChannelsTo(dst, 4, 7, channels[4:])
		})
		if allocs != 0 {
			t.Errorf("%d samples: %v allocations a block, want none", n, allocs)
		}
	}
}

package decimate

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// whole decimates a source in one go.
func whole(d, channels int, src []float64) []float64 {
	f := New(d, channels)
	return f.Flush(f.Append(nil, src))
}

// sameBits tells where a and b differ, -1 if nowhere.
func sameBits(a, b []float64) (at int) {
	for i := range min(len(a), len(b)) {
		if math.Float64bits(a[i]) != math.Float64bits(b[i]) {
			return i
		}
	}
	if len(a) != len(b) {
		return min(len(a), len(b))
	}
	return -1
}

func TestFactorOneIsThePlainSource(t *testing.T) {
	src := append(noise(7, 30), math.Copysign(0, -1), math.SmallestNonzeroFloat64, math.NaN(), math.Inf(1), -math.MaxFloat64, 1)
	if HalfLength(1) != 0 {
		t.Errorf("half length %d", HalfLength(1))
	}
	f := New(1, 3)
	out := f.Append(nil, src)
	if i := sameBits(out, src); i >= 0 {
		t.Errorf("differs at %d of %d", i, len(src))
	}
	if out, silent := f.AppendZeros(nil, 5); len(out) != 0 || silent != 5 {
		t.Errorf("5 zeros give %v and %d silent frames", out, silent)
	}
	if out := f.Flush(nil); len(out) != 0 {
		t.Errorf("%v is left at the end", out)
	}
}

// TestFilterIsTheConvolution compares every output, those at both ends too, with the plain sum over
// the source, frame m*d under the centre of the combined filter.
func TestFilterIsTheConvolution(t *testing.T) {
	const tolerance = 1e-13 // sums of some thousand products below 1, in another order
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.IntRange(1, MaxFactor).Draw(t, "d")
		frames := rapid.IntRange(0, 60*d).Draw(t, "frames")
		src := noise(rapid.Uint64().Draw(t, "seed"), frames)
		h, half := combined(d), HalfLength(d)
		out := whole(d, 1, src)
		if len(out) != (frames+d-1)/d {
			t.Fatalf("%d frames give %d", frames, len(out))
		}
		for m, got := range out {
			want := 0.0
			for n := max(0, m*d-half); n <= min(frames-1, m*d+half); n++ {
				want += src[n] * h[n-m*d+half]
			}
			if math.Abs(got-want) > tolerance {
				t.Fatalf("frame %d is %g, want %g", m, got, want)
			}
		}
	})
}

// TestImpulse puts one impulse at the source frame of an analysis frame: the delay is compensated
// exactly when the response is even about that frame, for every factor.
func TestImpulse(t *testing.T) {
	for d := 2; d <= MaxFactor; d++ {
		h, half := combined(d), HalfLength(d)
		at := half/d + 3
		src := make([]float64, (2*at+1)*d)
		src[at*d] = 1
		out := whole(d, 1, src)
		for m, got := range out {
			if want := coefficient(h, half+(m-at)*d); math.Abs(got-want) > 1e-15 {
				t.Errorf("d = %d: frame %d is %g, want %g", d, m, got, want)
			}
			// The peak is the filter's bandwidth, near 1/d, and all else is well below.
			if m != at && math.Abs(got) > out[at]/2 {
				t.Errorf("d = %d: frame %d is %g, the peak at frame %d is %g", d, m, got, at, out[at])
			}
			if mirrored := 2*at - m; mirrored < len(out) && math.Abs(got-out[mirrored]) > 1e-16 {
				t.Errorf("d = %d: frame %d is %g, its mirror image %g", d, m, got, out[mirrored])
			}
		}
	}
}

func coefficient(h []float64, n int) float64 {
	if n < 0 || n >= len(h) {
		return 0
	}
	return h[n]
}

// TestOutputComesWhenComplete checks for every factor that frame m comes with source frame m*d + F
// and no earlier, and how many there are after Flush.
func TestOutputComesWhenComplete(t *testing.T) {
	for d := 1; d <= MaxFactor; d++ {
		f, half := New(d, 1), HalfLength(d)
		frames := half + 3*d + d/2
		var out []float64
		for n := range frames {
			out = f.Append(out, []float64{1})
			want := 0
			if n >= half {
				want = (n-half)/d + 1
			}
			if len(out) != want {
				t.Fatalf("d = %d: %d frames after source frame %d, want %d", d, len(out), n, want)
			}
		}
		if out = f.Flush(out); len(out) != (frames+d-1)/d {
			t.Errorf("d = %d: %d source frames give %d", d, frames, len(out))
		}
	}
}

// TestStreaming cuts a source at random, with stretches of zeros that are either pushed or skipped,
// and wants the bits that come out in one go, and on each channel those of the channel alone.
func TestStreaming(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.OneOf(rapid.IntRange(1, 20), rapid.IntRange(1, MaxFactor)).Draw(t, "d")
		channels := rapid.IntRange(1, 6).Draw(t, "channels")
		f := New(d, channels)
		if rapid.Bool().Draw(t, "used before") {
			f.Flush(f.Append(nil, noise(3, 7*d*channels)))
		}
		var src, out []float64
		for range rapid.IntRange(0, 12).Draw(t, "calls") {
			frames := rapid.OneOf(rapid.IntRange(0, 3), rapid.IntRange(0, 30*d)).Draw(t, "frames")
			ready := f.Ready(int64(frames))
			before := len(out)
			if rapid.Bool().Draw(t, "zeros") {
				src = append(src, make([]float64, frames*channels)...)
				var silent int64
				out, silent = f.AppendZeros(out, int64(frames))
				if most := 2*HalfLength(d)/d + 2; (len(out)-before)/channels > most {
					t.Fatalf("%d zeros append %d frames, want at most %d", frames, (len(out)-before)/channels, most)
				}
				out = append(out, make([]float64, int(silent)*channels)...)
			} else {
				piece := noise(rapid.Uint64().Draw(t, "seed"), frames*channels)
				src = append(src, piece...)
				out = f.Append(out, piece)
			}
			if int64(len(out)-before) != ready*int64(channels) {
				t.Fatalf("%d frames are out, %d were to be ready", (len(out)-before)/channels, ready)
			}
		}
		waiting := f.Ready(int64(HalfLength(d)))
		before := len(out)
		out = f.Flush(out)
		if int64(len(out)-before) != waiting*int64(channels) || waiting > int64(HalfLength(d)/d+1) {
			t.Fatalf("Flush appends %d frames, %d were waiting", (len(out)-before)/channels, waiting)
		}
		if i := sameBits(out, whole(d, channels, src)); i >= 0 {
			t.Fatalf("differs from the whole source at sample %d", i)
		}
		c := rapid.IntRange(0, channels-1).Draw(t, "channel")
		if i := sameBits(channel(out, c, channels), whole(d, 1, channel(src, c, channels))); i >= 0 {
			t.Fatalf("channel %d differs from itself alone at frame %d", c, i)
		}
	})
}

// channel takes one channel out of interleaved frames.
func channel(x []float64, c, channels int) []float64 {
	var one []float64
	for i := c; i < len(x); i += channels {
		one = append(one, x[i])
	}
	return one
}

// TestManyChannels goes through all lengths of the walk over the channels.
func TestManyChannels(t *testing.T) {
	for _, channels := range []int{1, 2, 3, 4, 5, 8, 17, 64} {
		for _, d := range []int{2, 7, 18} {
			src := noise(uint64(channels), 60*d*channels)
			out := whole(d, channels, src)
			for c := range channels {
				if i := sameBits(channel(out, c, channels), whole(d, 1, channel(src, c, channels))); i >= 0 {
					t.Errorf("d = %d: channel %d of %d differs from itself alone at frame %d", d, c, channels, i)
				}
			}
		}
	}
}

func TestSilentChannelStaysSilent(t *testing.T) {
	for _, d := range []int{2, 6, 18, 37} {
		src := noise(5, 3*60*d)
		for i := 1; i < len(src); i += 3 {
			src[i] = 0
		}
		for m, x := range channel(whole(d, 3, src), 1, 3) {
			if x != 0 {
				t.Fatalf("d = %d: frame %d is %g", d, m, x)
			}
		}
	}
}

func TestNonFiniteSpoilsItsChannelOnly(t *testing.T) {
	for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		for _, d := range []int{2, 18, 37, 256} {
			const channels = 2
			half := HalfLength(d)
			frames := 4 * half
			src := noise(9, frames*channels)
			clean := whole(d, channels, src)
			at := 2*half + d/3
			src[at*channels] = bad
			for i, x := range whole(d, channels, src) {
				m, c := i/channels, i%channels
				if far := max(m*d-at, at-m*d) > half; (far || c == 1) && x != clean[i] {
					t.Errorf("%v, d = %d: channel %d of frame %d is %g, was %g", bad, d, c, m, x, clean[i])
				}
			}
		}
	}
}

// TestHoursOfZeros skips more frames than could ever be pushed and wants the next impulse at its
// place.
func TestHoursOfZeros(t *testing.T) {
	for _, d := range []int{1, 2, 18, 37, 243, 251, 256} {
		for _, lost := range []int64{1 << 40, 1<<40 + 1, 1<<50 + 12345, 1 << 62} {
			t.Run(fmt.Sprintf("d=%d/lost=%d", d, lost), func(t *testing.T) {
				f := New(d, 1)
				src := noise(2, 5*d+1)
				frames := int64(len(src))
				out := f.Append(nil, src)
				count := int64(len(out))
				out, silent := f.AppendZeros(nil, lost)
				frames += lost
				count += int64(len(out)) + silent
				if half := int64(HalfLength(d)); count != (frames-1-half)/int64(d)+1 {
					t.Fatalf("%d frames after %d source frames", count, frames)
				}

				next := (frames/int64(d) + 3) * int64(d) // an analysis frame's place
				tail := make([]float64, next-frames+1)
				tail[len(tail)-1] = 1
				peak, end := int64(0), f.Flush(f.Append(nil, tail))
				for i, x := range end {
					if x > end[peak] {
						peak = int64(i)
					}
				}
				if (count+peak)*int64(d) != next {
					t.Errorf("the impulse at %d is in frame %d", next, count+peak)
				}
			})
		}
	}
}

func TestSteadyStateAllocatesNothing(t *testing.T) {
	for _, d := range []int{1, 2, 18, 37, 256} {
		const channels = 8
		f := New(d, channels)
		src := noise(4, 1000*channels)
		dst := make([]float64, 0, 4000*channels)
		for name, call := range map[string]func(){
			"Append":      func() { f.Append(dst, src) },
			"AppendZeros": func() { f.Append(dst, src); f.AppendZeros(dst, 1<<30) },
			"Flush":       func() { f.Append(dst, src); f.Flush(dst) },
			"Ready":       func() { f.Ready(1000) },
		} {
			if n := testing.AllocsPerRun(20, call); n != 0 {
				t.Errorf("d = %d: %s allocates %v times", d, name, n)
			}
		}
	}
}

func TestAppendKeepsNoHoldOfItsSlices(t *testing.T) {
	const d = 6
	src := noise(8, 100*d)
	want := whole(d, 1, src)
	f := New(d, 1)
	var out []float64
	for piece := range slices.Chunk(src, 7) {
		scratch := slices.Clone(piece)
		got := f.Append(nil, scratch)
		out = append(out, got...)
		for i := range scratch {
			scratch[i] = math.NaN()
		}
		for i := range got {
			got[i] = math.NaN()
		}
	}
	if i := sameBits(f.Flush(out), want); i >= 0 {
		t.Errorf("differs at %d", i)
	}
}

func TestPanics(t *testing.T) {
	for _, c := range []struct {
		name, want string
		call       func()
	}{
		{"factor zero", "decimate: factor 0, want 1 to 256", func() { New(0, 1) }},
		{"factor too large", "decimate: factor 257, want 1 to 256", func() { New(257, 1) }},
		{"half length of a negative factor", "decimate: factor -1, want 1 to 256", func() { HalfLength(-1) }},
		{"no channels", "decimate: 0 channels, want at least 1", func() { New(2, 0) }},
		{"part of a frame", "decimate: 4 samples are no whole frames of 3 channels", func() { New(2, 3).Append(nil, make([]float64, 4)) }},
		{"negative zeros", "decimate: -1 frames of zeros, want at least 0", func() { New(2, 3).AppendZeros(nil, -1) }},
		{"negative frames", "decimate: -1 source frames, want at least 0", func() { New(2, 3).Ready(-1) }},
	} {
		t.Run(c.name, func(t *testing.T) {
			defer func() {
				if got := recover(); got != c.want {
					t.Errorf("panics with %v, want %q", got, c.want)
				}
			}()
			c.call()
		})
	}
}

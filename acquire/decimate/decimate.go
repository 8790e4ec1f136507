// Package decimate holds the filter that turns source frames into analysis frames, every d-th, for
// any whole d from 1 to 256.
//
// It knows samples and channels. It may not know rates in Hz, lost frames, files or spectra.
//
// The filter is a cascade of linear-phase FIR stages whose delay is taken out: analysis frame m is
// the filtered signal at source frame m*d, on all channels alike. Before the first source frame and
// behind the last there are zeros. With the analysis rate as the unit of frequency, the passband
// ends at 0.390625, which is 1/2.56, and what folds into it lies within 0.390625 of a multiple of 1.
// Over all d, measured on the combined response by the tests:
//
//	passband ripple                        at most 0.0003 dB (d = 176)
//	a tone that folds into the passband    at least 103.7 dB down (d = 8)
//	all that folds onto one frequency      at least 100.1 dB down in power, from white noise (d = 189)
//	half length                            at most 19.9 d source frames (d = 88)
//
// Between 0.390625 and 0.5 lies the transition, where analysis samples are neither flat nor free of
// folded signal. In exact arithmetic the gain at 0 Hz is 1; with d = 1 samples pass unchanged.
package decimate

import "fmt"

// MaxFactor is the largest d.
const MaxFactor = 256

// HalfLength is the number F of source frames on either side of frame m*d that analysis frame m
// depends on: 0 for d = 1, else at most 24 d. It panics unless 1 <= d <= MaxFactor.
func HalfLength(d int) int {
	half, rate := 0, 1
	for _, k := range factors(d) {
		half += stageHalf(k, d/rate/k) * rate
		rate *= k
	}
	return half
}

// A Filter decimates one source, frame after frame. What it gives does not depend on how the frames
// are cut into calls, and a channel's samples do not depend on the other channels or their number,
// bit for bit. A channel of zeros stays a channel of zeros. A sample that is NaN or infinite spoils
// its own channel within F source frames of it, F the half length, and nothing else.
type Filter struct {
	channels int
	half     int // HalfLength, source frames
	stages   []stage
	early    int64     // outputs of the last stage still to come that lie before analysis frame 0
	memory   int64     // zero frames after which nothing but zeros is left in any stage
	live     int64     // zero frames still missing from that state
	zeros    []float64 // a few frames of zeros to push
}

// zeroFrames is how many frames of zeros are pushed at once, enough to make a call cheap.
const zeroFrames = 64

// New returns a filter for frames of the given number of channels that keeps every d-th. It panics
// unless 1 <= d <= MaxFactor and channels >= 1.
func New(d, channels int) *Filter {
	if channels < 1 {
		panic(fmt.Sprintf("decimate: %d channels, want at least 1", channels))
	}
	f := &Filter{channels: channels, half: HalfLength(d), zeros: make([]float64, zeroFrames*channels)}
	rate := 1
	for _, k := range factors(d) {
		s := newStage(k, newLowpass(k, d/rate/k), channels)
		f.memory += int64(s.frames) * int64(rate)
		f.stages = append(f.stages, s)
		rate *= k
	}
	f.reset()
	return f
}

// reset makes the filter forget all frames.
func (f *Filter) reset() {
	first := 0
	for i := range f.stages {
		first = f.stages[i].reset(first)
	}
	f.early = int64(-first)
	f.live = 0
}

// Append takes src, whole source frames with the channel fastest, appends the analysis frames that
// they complete to dst in the same layout, and returns dst. Analysis frame m is complete with source
// frame m*d + F, F the half length. Append keeps no hold of either slice, which must not overlap, and
// allocates nothing when dst has room for Ready frames. It panics when src ends within a frame.
func (f *Filter) Append(dst, src []float64) []float64 {
	if len(src)%f.channels != 0 {
		panic(fmt.Sprintf("decimate: %d samples are no whole frames of %d channels", len(src), f.channels))
	}
	if len(src) > 0 {
		f.live = f.memory
	}
	return f.push(0, dst, src)
}

// AppendZeros does what Append does with n source frames of zeros, in a time that does not grow with
// n: out is dst with the frames that may still hold something appended, at most 2 F/d + 2 of them, and
// silent is the number of frames behind those that would be zero in every channel and are not
// appended. It panics when n < 0.
func (f *Filter) AppendZeros(dst []float64, n int64) (out []float64, silent int64) {
	if n < 0 {
		panic(fmt.Sprintf("decimate: %d frames of zeros, want at least 0", n))
	}
	walk := min(n, f.live)
	f.live -= walk
	n -= walk
	for walk > 0 {
		piece := min(walk, zeroFrames)
		dst = f.push(0, dst, f.zeros[:int(piece)*f.channels])
		walk -= piece
	}
	return dst, f.jump(n)
}

// Flush ends the source: it appends the analysis frames that still wait for frames behind the end,
// at most F/d + 1 of them, and returns dst. With those, a source of n frames has given one analysis
// frame for each m with m*d < n. The filter is then as New made it, ready for another source.
func (f *Filter) Flush(dst []float64) []float64 {
	dst, silent := f.AppendZeros(dst, int64(f.half))
	for ; silent > 0; silent-- {
		dst = append(dst, f.zeros[:f.channels]...)
	}
	f.reset()
	return dst
}

// Ready is the number of analysis frames that the next n source frames complete. It panics when
// n < 0.
func (f *Filter) Ready(n int64) int64 {
	if n < 0 {
		panic(fmt.Sprintf("decimate: %d source frames, want at least 0", n))
	}
	for i := range f.stages {
		p := f.stages[i].phase
		n = p.advance(n)
	}
	return max(0, n-f.early)
}

// push gives src to stage i, what comes out of it to the next one, and what comes out of the last
// to dst.
func (f *Filter) push(i int, dst, src []float64) []float64 {
	if i == len(f.stages) {
		if f.early > 0 {
			f.early--
			return dst
		}
		return append(dst, src...)
	}
	s := &f.stages[i]
	for {
		rest, ready := s.take(src)
		if !ready {
			return dst
		}
		dst = f.push(i+1, dst, s.sum())
		src = rest
	}
}

// jump lets n frames of zeros pass through stages that hold nothing but zeros, and returns how many
// analysis frames they complete.
func (f *Filter) jump(n int64) int64 {
	for i := range f.stages {
		n = f.stages[i].advance(n)
	}
	early := min(f.early, n)
	f.early -= early
	return n - early
}

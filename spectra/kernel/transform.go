package kernel

// A Transform takes the windowed discrete Fourier transforms of up to Lanes channels of a block at
// a time. It serves one goroutine; every worker has its own.
//
// Lengths whose only prime factors are 2, 3 and 5 go through the loops of this package, an odd one
// at about half the speed of its even neighbours; all others through gonum, channel by channel.
type Transform struct {
	loops   *loops
	window  []float64 // halved where the length is even: see bin
	stages  []stage
	bins    []bin // where the length is even
	place   []int // the element at which a line stands after the passes
	x       []float64
	from    [Lanes][]float64
	silence []float64    // of lanes without a channel
	few     []complex128 // the lines, where there are fewer than Lanes channels

	other *other // does it all where it is not nil
}

// NewTransform makes a Transform for blocks that are as long as the window's values, of which it
// keeps a copy. It panics when there are none.
func NewTransform(window []float64) *Transform { return newTransform(window, fastest) }

func newTransform(window []float64, loops *loops) *Transform {
	n := len(window)
	if n == 0 {
		panic("kernel: window of no length")
	}
	t := &Transform{loops: loops, window: append([]float64(nil), window...)}
	points := n
	if n%2 == 0 {
		points = n / 2
	}
	radices, ok := factor(points)
	if !ok {
		t.other = newOther(t.window)
		return t
	}
	t.stages = newStages(radices, points, loops)
	t.place = places(radices, points)
	if n%2 == 0 {
		t.bins = newBins(n, t.place)
		for i := range t.window {
			t.window[i] /= 2
		}
	}
	t.x = make([]float64, points*element)
	t.silence = make([]float64, n)
	t.few = make([]complex128, (n/2+1)*Lanes)
	return t
}

// ChannelsTo writes the transforms Σ w(n) x(n) e^{-2πikn/N} of one to Lanes channels for lines
// k = 0, 1, ... into dst[k·channels+first], dst[k·channels+first+1], ... to the end of dst; the rest
// of dst stays as it is. samples[c] are the samples of channel first+c. dst must not overlap them.
//
// Each channel has arithmetic of its own: nothing of one leaks into another, a channel's bits do not
// depend on which others are there, and a silent one is exactly zero. A NaN or an infinity makes its
// own channel unknown, on every line.
//
// It panics when there are no or more than Lanes channels of samples, or one that is not as long as
// the window; when dst has no room for channels first to first+len(samples)-1, or is no whole number
// of lines, or more than the block has.
func (t *Transform) ChannelsTo(dst []complex128, first, channels int, samples [][]float64) {
	n, count := len(t.window), len(samples)
	if count < 1 || count > Lanes {
		panic("kernel: a transform takes one to four channels")
	}
	if first < 0 || first+count > channels || len(dst)%channels != 0 || len(dst)/channels > n/2+1 {
		panic("kernel: transform and lines differ in shape")
	}
	for _, s := range samples {
		if len(s) != n {
			panic("kernel: block and window differ in length")
		}
	}
	lines := len(dst) / channels
	switch {
	case lines == 0:
	case t.other != nil:
		for c, s := range samples {
			t.other.channelTo(dst[first+c:], channels, s)
		}
	case count == Lanes:
		t.transform(samples)
		t.linesTo(dst[first:], channels, lines)
	default:
		t.transform(samples)
		t.linesTo(t.few, Lanes, lines)
		for k := range lines {
			copy(dst[k*channels+first:][:count], t.few[k*Lanes:])
		}
	}
}

// transform takes samples through all passes.
func (t *Transform) transform(samples [][]float64) {
	for c := range t.from {
		t.from[c] = t.silence
	}
	copy(t.from[:], samples)
	t.loops.load(t.x, t.window, &t.from)
	if t.bins == nil {
		spread(t.x, len(t.window))
	}
	for _, s := range t.stages {
		s.run(t.x)
	}
}

// linesTo writes the lines of all lanes into dst[k·stride:].
func (t *Transform) linesTo(dst []complex128, stride, lines int) {
	if t.bins != nil {
		t.loops.split(dst, stride, t.x, t.bins[:lines])
		return
	}
	for k, place := range t.place[:lines] {
		to := dst[k*stride:][:Lanes]
		for l := range to {
			to[l] = at(t.x, place, l)
		}
	}
}

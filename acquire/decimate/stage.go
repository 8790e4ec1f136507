package decimate

// A stage filters frames and keeps every factor-th of the result. Its output j is centred on its
// input j*factor, whatever the sign of j: the input may begin at a negative index, since an earlier
// stage rings half its length before the first source frame.
type stage struct {
	phase
	half     int // inputs on either side of the centre
	frames   int // length of the window, 2 half + 1
	channels int

	gain  float64 // of the centre
	pairs []pair  // the other taps that are not zero, from the centre outwards

	buf []float64 // input frames, channel fastest; the window is the last of them
	end int       // samples in buf
	row []float64 // the frame that sum returns
}

// A pair is two taps equally far from the centre of a symmetric filter.
type pair struct {
	before, after int // position of their frames in the window, samples
	gain          float64
}

func newStage(factor int, h lowpass, channels int) stage {
	half := h.half()
	s := stage{
		phase:    phase{factor: int64(factor)},
		half:     half,
		frames:   2*half + 1,
		channels: channels,
		gain:     h[0],
		row:      make([]float64, channels),
	}
	for n := 1; n <= half; n++ {
		if h[n] != 0 {
			s.pairs = append(s.pairs, pair{(half - n) * channels, (half + n) * channels, h[n]})
		}
	}
	// Room behind the window makes moving the window to the front rare.
	s.buf = make([]float64, (s.frames+max(half, factor))*channels)
	return s
}

// reset fills the window with zeros. The next input has the index first, at most 0; all before it
// are zero. It returns the index of the first output that the inputs from first on can change.
func (s *stage) reset(first int) int {
	s.end = s.frames * s.channels
	clear(s.buf[:s.end])
	factor := int(s.factor)
	output := -((s.half - first) / factor)
	s.wait = int64(output*factor + s.half - first + 1)
	return output
}

// take moves frames from src into the window until an output is due or src is used up.
func (s *stage) take(src []float64) (rest []float64, ready bool) {
	n := int(min(int64(len(src)/s.channels), s.wait))
	samples := n * s.channels
	if s.end+samples > len(s.buf) {
		window := s.frames * s.channels
		copy(s.buf, s.buf[s.end-window:s.end])
		s.end = window
	}
	copy(s.buf[s.end:], src[:samples])
	s.end += samples
	return src[samples:], s.advance(int64(n)) == 1
}

// sum is the output for the window as it is. The result is overwritten by the next call.
//
// Each channel has its own sum, in an order that the taps alone decide. The conversions to float64
// keep the compiler from fusing a product with a sum, so that the bits are the same wherever it may.
func (s *stage) sum() []float64 {
	row := s.row
	w := s.buf[s.end-s.frames*s.channels : s.end]
	centre := w[s.half*s.channels:][:len(row)]
	for c := range row {
		row[c] = s.gain * centre[c]
	}
	pairs := s.pairs
	for ; len(pairs) >= 4; pairs = pairs[4:] {
		addFour(row, w, (*[4]pair)(pairs))
	}
	for _, p := range pairs {
		a, b := w[p.before:][:len(row)], w[p.after:][:len(row)]
		for c := range row {
			row[c] += float64(p.gain * (a[c] + b[c]))
		}
	}
	return row
}

// addFour adds four pairs of taps in one walk over the channels, which saves most of the reading and
// writing of row.
func addFour(row, w []float64, p *[4]pair) {
	n := len(row)
	a0, b0, g0 := w[p[0].before:][:n], w[p[0].after:][:n], p[0].gain
	a1, b1, g1 := w[p[1].before:][:n], w[p[1].after:][:n], p[1].gain
	a2, b2, g2 := w[p[2].before:][:n], w[p[2].after:][:n], p[2].gain
	a3, b3, g3 := w[p[3].before:][:n], w[p[3].after:][:n], p[3].gain
	for c := range row {
		near := float64(g0*(a0[c]+b0[c])) + float64(g1*(a1[c]+b1[c]))
		far := float64(g2*(a2[c]+b2[c])) + float64(g3*(a3[c]+b3[c]))
		row[c] += near + far
	}
}

package watch

// A taper makes of a block's transform without a window that with a Hann window, since that is a product in
// time: line k becomes k/2 - (k-1)/4 - (k+1)/4.
//
// Random signals cut without a window leave a response's residual full of what the block's two ends cut
// off, which is one and the same on hundreds of lines: sums over lines then scatter far more than any that
// are independent. Tapered, the residual is what is left without the ends.
type taper struct {
	channels int
	lines    []complex128
}

// of returns the tapered transform, without a value on the last line. It is good until the next call.
func (t *taper) of(lines []complex128) []complex128 {
	c := t.channels
	if t.lines == nil {
		t.lines = make([]complex128, len(lines))
	}
	for n := c; n < len(lines)-c; n++ {
		t.lines[n] = lines[n]/2 - lines[n-c]/4 - lines[n+c]/4
	}
	for ch := range c { // line -1 is the conjugate of line 1
		t.lines[ch] = complex(real(lines[ch])/2-real(lines[c+ch])/2, 0)
	}
	return t.lines
}

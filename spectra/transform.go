package spectra

import "gonum.org/v1/gonum/dsp/fourier"

// A Transform takes the windowed discrete Fourier transform of one channel of a block at a time.
// It serves one goroutine; every worker has its own.
type Transform struct {
	fft      *fourier.FFT
	window   []float64
	windowed []float64
	lines    []complex128 // all block/2 + 1 of them
}

// NewTransform makes a Transform for blocks that are as long as the window's values, of which it
// keeps no copy: they must not change.
func NewTransform(window []float64) *Transform {
	n := len(window)
	return &Transform{
		fft:      fourier.NewFFT(n),
		window:   window,
		windowed: make([]float64, n),
		lines:    make([]complex128, n/2+1),
	}
}

// ChannelTo writes the transform of samples, Σ w(n) x(n) e^{-2πikn/N}, for lines k = 0, 1, ...
// into dst[channel], dst[channel+channels], ... to the end of dst. It panics when samples is not
// as long as the window, or dst holds more lines than there are.
//
// Each channel has a transform of its own: nothing of one leaks into another.
func (t *Transform) ChannelTo(dst []complex128, channel, channels int, samples []float64) {
	if len(samples) != len(t.window) {
		panic("spectra: block and window differ in length")
	}
	for i, w := range t.window {
		t.windowed[i] = w * samples[i]
	}
	t.fft.Coefficients(t.lines, t.windowed)
	lines := t.lines[:len(dst)/channels]
	for k, v := range lines {
		dst[k*channels+channel] = v
	}
}

package spectra

import "shakerwatch/spectra/kernel"

// together is how many channels one transform takes side by side.
const together = kernel.Lanes

// A Transform takes the windowed discrete Fourier transform of a few channels of a block at a time.
// It serves one goroutine; every worker has its own.
type Transform struct {
	kernel  *kernel.Transform
	samples [together][]float64
}

// NewTransform makes a Transform for blocks that are as long as the window's values, of which it
// keeps a copy.
func NewTransform(window []float64) *Transform {
	return &Transform{kernel: kernel.NewTransform(window)}
}

// ChannelTo writes the transform of samples, Σ w(n) x(n) e^{-2πikn/N}, for lines k = 0, 1, ...
// into dst[channel], dst[channel+channels], ... to the end of dst. It panics when samples is not
// as long as the window, or dst holds more lines than there are.
//
// Each channel has a transform of its own: nothing of one leaks into another.
func (t *Transform) ChannelTo(dst []complex128, channel, channels int, samples []float64) {
	t.samples[0] = samples
	t.kernel.ChannelsTo(dst, channel, channels, t.samples[:1])
}

// groupTo is ChannelTo for count channels from the first one on, the samples of one stride behind those
// of the one before it.
func (t *Transform) groupTo(dst []complex128, first, count, channels int, samples []float64, n, stride int) {
	for c := range count {
		t.samples[c] = samples[c*stride:][:n]
	}
	t.kernel.ChannelsTo(dst, first, channels, t.samples[:count])
}

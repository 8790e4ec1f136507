package kernel

import "gonum.org/v1/gonum/dsp/fourier"

// other is the transform of one channel, of any length, by gonum.
type other struct {
	fft              *fourier.FFT
	window, windowed []float64
	lines            []complex128
}

func newOther(window []float64) *other {
	n := len(window)
	return &other{
		fft:      fourier.NewFFT(n),
		window:   window,
		windowed: make([]float64, n),
		lines:    make([]complex128, n/2+1),
	}
}

// channelTo writes line k into dst[k·stride], to the end of dst.
func (o *other) channelTo(dst []complex128, stride int, samples []float64) {
	for i, w := range o.window {
		o.windowed[i] = w * samples[i]
	}
	o.fft.Coefficients(o.lines, o.windowed)
	for k := 0; k*stride < len(dst); k++ {
		dst[k*stride] = o.lines[k]
	}
}

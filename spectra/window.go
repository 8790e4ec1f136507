package spectra

import (
	"fmt"
	"math"
)

// A Window is the weight that a block is multiplied by before its transform.
type Window string

// The windows that a rig file can name.
const (
	Hann        Window = "hann"
	Rectangular Window = "rectangular"
	FlatTop     Window = "flattop"
)

// cosines are the coefficients a_k of sum a_k cos(2πkn/N). Hann: Harris, Proc. IEEE 66, 1978;
// flat top: ISO 18431-2.
func (w Window) cosines() []float64 {
	switch w {
	case Hann:
		return []float64{0.5, -0.5}
	case Rectangular:
		return []float64{1}
	case FlatTop:
		return []float64{1, -1.933, 1.286, -0.388, 0.0322}
	}
	panic(fmt.Sprintf("spectra: no window is called %q", string(w)))
}

// Values are the n weights of the periodic window (a Hann's first is 0 and its middle one is 1).
// It panics when n < 1 or the window has no such name.
func (w Window) Values(n int) []float64 {
	if n < 1 {
		panic("spectra: window of no length")
	}
	values := make([]float64, n)
	a := w.cosines()
	for i := range values {
		for k, ak := range a {
			// The angle is reduced in integers, so that it stays exact for long blocks.
			values[i] += ak * math.Cos(2*math.Pi*float64(k*i%n)/float64(n))
		}
	}
	return values
}

// Smear is the highest line into which the window spreads what stands at 0 Hz, by the project's
// own rule: one line beyond the window's terms. Lines up to it are never judged.
func (w Window) Smear() int {
	return len(w.cosines())
}

// NoiseBandwidth is the equivalent noise bandwidth in lines, N Σw² / (Σw)², of a window's values
// (Harris 1978).
func NoiseBandwidth(values []float64) float64 {
	var sum float64
	for _, v := range values {
		sum += v
	}
	return float64(len(values)) * sumOfSquares(values) / (sum * sum)
}

func sumOfSquares(values []float64) float64 {
	var sum float64
	for _, v := range values {
		sum += v * v
	}
	return sum
}

// OverlapCorrelation is rho = Σ w(m) w(m+lag) / Σ w²: the correlation of the transforms of two blocks of
// white noise that start lag samples apart (Welch, IEEE Trans. Audio Electroacoust. AU-15, 1967).
// It is 0 when the blocks do not overlap and panics when lag < 0.
func OverlapCorrelation(values []float64, lag int) float64 {
	if lag < 0 {
		panic("spectra: negative lag")
	}
	if lag >= len(values) {
		return 0
	}
	var sum float64
	for m, v := range values[lag:] {
		sum += values[m] * v
	}
	return sum / sumOfSquares(values)
}

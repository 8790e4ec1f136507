package kernel

import "golang.org/x/sys/cpu"

// fastest are the loops that this processor runs best.
var fastest = choose(cpu.X86.HasAVX2)

func choose(avx2 bool) *loops {
	if avx2 {
		return &vector
	}
	return &plain
}

var vector = loops{
	load:  loadVector,
	pass3: pass3AVX2, pass4: pass4AVX2, pass5: pass5AVX2,
	last2: last2AVX2, last4: last4AVX2, last8: last8AVX2,
	split: splitAVX2,
	outer: outerAVX2,
	power: powerVector,

	misfit:     misfitAVX2,
	logarithms: logarithmsVector,
}

// loadVector leaves what does not fill a group of Lanes samples to the plain loop.
func loadVector(x, window []float64, from *[Lanes][]float64) {
	n := len(window) / Lanes * Lanes
	loadAVX2(x, window[:n], from)
	for i := n; i < len(window); i++ {
		for l := range from {
			x[i*Lanes+l] = window[i] * from[l][i]
		}
	}
}

// powerVector leaves what does not fill a register to the plain loop.
func powerVector(sums []float64, y []complex128) {
	n := len(y) / 4 * 4
	powerAVX2(sums[:n], y[:n])
	powerPlain(sums[n:], y[n:])
}

// logarithmsVector leaves what does not fill a register to the plain loop.
func logarithmsVector(x []float64) {
	n := len(x) / 4 * 4
	logarithmsAVX2(x[:n])
	logarithmsPlain(x[n:])
}

//go:noescape
func loadAVX2(x, window []float64, from *[Lanes][]float64)

//go:noescape
func pass3AVX2(x, turns []float64, m int)

//go:noescape
func pass4AVX2(x, turns []float64, m int)

//go:noescape
func pass5AVX2(x, turns []float64, m int)

//go:noescape
func last2AVX2(x []float64)

//go:noescape
func last4AVX2(x []float64)

//go:noescape
func last8AVX2(x []float64)

//go:noescape
func splitAVX2(dst []complex128, stride int, z []float64, bins []bin)

//go:noescape
func outerAVX2(sums, y, x []complex128)

//go:noescape
func powerAVX2(sums []float64, y []complex128)

//go:noescape
func misfitAVX2(products []float64, y, x []complex128, values, weights []float32, gain, most float64)

//go:noescape
func logarithmsAVX2(x []float64)

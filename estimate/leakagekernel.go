package estimate

import (
	"math"
	"math/cmplx"

	"shakerwatch/spectra"
)

// maxTerm is the highest term of any window, that of the flat top.
const maxTerm = 4

// A kernel is how a window widens a narrow mode. The expected H1 from wide-band random forces is the
// true H, weighted over frequency with the window's power |W|² (all that H1 averages are products of
// transforms at one line). For a mode of half-power bandwidth B lines, x lines off its centre,
// 1/(1 + 2ix/B) becomes
//
//	πB ∫ r(τ) e^{-(πB + 2πix) τ} dτ over 0 <= τ <= 1,
//
// τ in block lengths, r(τ) the autocorrelation of the window normalised to r(0) = 1, which is what |W|² is in
// time. A window is a sum of α_k e^{2πikτ}, so r(τ) is the sum over k of (α_k² (1-τ) + β_k) e^{2πikτ} over
// Σ α_k², β_k = Σ α_k α_(k+m) / (iπm) over m not 0, and the integral has a closed form. Own derivation;
// the tests compare it with the sum over |W|².
type kernel struct {
	none  bool // signals that fit into the block do not leak
	terms []kernelTerm
}

type kernelTerm struct {
	k     float64
	alpha float64 // α_k² / Σ α²
	beta  float64 // β_k / Σ α², which is i times this
}

// newKernel is the kernel of a window; leaks is false for signals that are periodic or have died out
// within the block.
func newKernel(w spectra.Window, leaks bool) *kernel {
	alpha := windowTerms(w)
	at := func(k int) float64 {
		if k < -maxTerm || k > maxTerm {
			return 0
		}
		return alpha[k+maxTerm]
	}
	var power float64
	for _, a := range alpha {
		power += a * a
	}
	kn := &kernel{none: !leaks}
	for k := -maxTerm; k <= maxTerm; k++ {
		if at(k) == 0 {
			continue
		}
		var beta float64
		for m := -2 * maxTerm; m <= 2*maxTerm; m++ {
			if m != 0 {
				beta -= at(k) * at(k+m) / (math.Pi * float64(m))
			}
		}
		kn.terms = append(kn.terms, kernelTerm{float64(k), at(k) * at(k) / power, beta / power})
	}
	return kn
}

// mode is what becomes of 1/(1 + 2ix/B), x and B in lines.
func (kn *kernel) mode(x, bandwidth float64) complex128 {
	if kn.none {
		return 1 / complex(1, 2*x/bandwidth)
	}
	decay := math.Pi * bandwidth
	sin, cos := math.Sincos(2 * math.Pi * x)
	size := math.Exp(-decay)
	end := complex(size*cos, -size*sin) // e^{-s}, the same for every term
	var sum complex128
	for _, t := range kn.terms {
		s := complex(decay, 2*math.Pi*(x-t.k))
		one := (1 - end) / s                       // ∫ e^{-sτ}
		ramp := (1 - one) / s                      // ∫ (1-τ) e^{-sτ}
		if abs2(s) < smallExponent*smallExponent { // the same by its series, where the difference cancels
			one, ramp = 1-s/2+s*s/6, 0.5-s/6+s*s/24
		}
		sum += complex(t.alpha, 0)*ramp + complex(0, t.beta)*one
	}
	return sum * complex(decay, 0)
}

// smallExponent is where the series of three terms is as exact as the closed form.
const smallExponent = 1e-4

// low is by how much |H1| is low at a line on the peak of a mode, as a share.
func (kn *kernel) low(bandwidth float64) float64 {
	return 1 - cmplx.Abs(kn.mode(0, bandwidth))
}

// windowTerms are α_-maxTerm to α_maxTerm.
func windowTerms(w spectra.Window) [2*maxTerm + 1]float64 {
	values := w.Values(kernelSamples)
	var alpha [2*maxTerm + 1]float64
	for k := -maxTerm; k <= maxTerm; k++ {
		a := harmonic(values, k)
		if math.Abs(a) > 1e-12 { // else rounding
			alpha[k+maxTerm] = a
		}
	}
	return alpha
}

// kernelSamples is more than twice the terms of a window's square, so that sums over them are exact.
const kernelSamples = 64

// harmonic is the mean of values times cos(2πkn/N): all windows are even.
func harmonic(values []float64, k int) float64 {
	var sum float64
	for n, v := range values {
		sum += v * math.Cos(2*math.Pi*float64(k*n)/float64(len(values)))
	}
	return sum / float64(len(values))
}

// A LineCorrelation says how alike the transforms of white noise are 1, 2, ... lines apart: |c|²,
// c = Σ w² e^{2πijn/N} / Σ w². A Hann has 4/9 and 1/36, a rectangular window nothing.
type LineCorrelation [2 * maxTerm]float64

// NewLineCorrelation is that of a window.
func NewLineCorrelation(w spectra.Window) LineCorrelation {
	values := w.Values(kernelSamples)
	for n, v := range values {
		values[n] = v * v
	}
	var l LineCorrelation
	power := harmonic(values, 0)
	for j := range l {
		c := harmonic(values, j+1) / power
		l[j] = c * c
	}
	return l
}

package demo

import (
	"fmt"
	"math"
	"math/cmplx"
)

// ForceDensities puts the cross-spectral densities of the measured forces, (i, j) with E[x_i x_j*], one-sided and in
// N²/Hz, into dst and returns it: what an average without end would find with random excitation, sensor noise included,
// before any window smears it over lines. shares is how much of each drive's amplitude reaches its shaker, nil for all
// of all. dst is nil or has q times q elements, and shares nil or q, else it panics.
//
// 0 < freqHz <= max_frequency, where the drives are flat; it panics elsewhere.
//
// With A the receptances between the driving points, K a stinger and Z an armature with its flexure, the forces are
// (diag(1/K + 1/Z) + A)^-1 diag(1/Z) times those on armatures at rest, as in forcesByHand of the tests.
func (t *Truth) ForceDensities(dst []complex128, freqHz float64, shares []float64) []complex128 {
	q := len(t.shakers)
	if dst == nil {
		dst = make([]complex128, q*q)
	}
	if len(dst) != q*q || shares != nil && len(shares) != q || !(freqHz > 0 && freqHz <= t.topHz) {
		panic(fmt.Sprintf("demo: force densities need %d places, %d shares and a frequency up to %g Hz", q*q, q, t.topHz))
	}
	w := 2 * math.Pi * freqHz
	matrix, drives := make([]complex128, q*q), make([]complex128, q*q)
	for i, sh := range t.shakers {
		for j, other := range t.shakers {
			matrix[i*q+j] = t.structure.accelerance(freqHz, sh.at, other.at) / complex(-w*w, 0)
		}
		stinger := complex(sh.stingerNPerM, w*sh.stingerNSPerM)
		armature := complex(sh.flexureNPerM-w*w*sh.armatureKg, w*sh.resistance())
		matrix[i*q+i] += 1/stinger + 1/armature
		// The band of the drives is as wide as from 0 Hz to the middle of its edge.
		density := sh.driveRMS * sh.driveRMS / (t.topHz * (passRatio + stopRatio) / 2)
		drives[i*q+i] = complex(sh.gain()*math.Sqrt(density), 0) / armature
		if shares != nil {
			drives[i*q+i] *= complex(shares[i], 0)
		}
	}
	forces := solveComplex(matrix, drives, q)
	for i := range q {
		for j := range q {
			var sum complex128
			for k := range q {
				sum += forces[i*q+k] * cmplx.Conj(forces[j*q+k])
			}
			dst[i*q+j] = complex(t.forces[i].Sign()*t.forces[j].Sign(), 0) * sum
		}
		dst[i*q+i] += complex(t.floors[i].densityAt(freqHz), 0)
	}
	return dst
}

// densityAt is the one-sided power density of the noise, for frequencies far below the rate.
func (f floor) densityAt(freqHz float64) float64 {
	if f.density == 0 {
		return 0
	}
	gain := 1 + complex(f.rise-1, 0)/complex(1, freqHz/f.cornerHz)
	return f.density * f.density * real(gain*cmplx.Conj(gain))
}

// solveComplex returns x of a x = b, n by n each, row by row, and overwrites both: Gauss with partial pivoting. a has
// an inverse, as passive mechanics have at every frequency.
func solveComplex(a, b []complex128, n int) []complex128 {
	for c := range n {
		pivot := c
		for r := c + 1; r < n; r++ {
			if cmplx.Abs(a[r*n+c]) > cmplx.Abs(a[pivot*n+c]) {
				pivot = r
			}
		}
		for k := range n {
			a[c*n+k], a[pivot*n+k] = a[pivot*n+k], a[c*n+k]
			b[c*n+k], b[pivot*n+k] = b[pivot*n+k], b[c*n+k]
		}
		for r := range n {
			if r == c {
				continue
			}
			factor := a[r*n+c] / a[c*n+c]
			for k := range n {
				a[r*n+k] -= factor * a[c*n+k]
				b[r*n+k] -= factor * b[c*n+k]
			}
		}
	}
	for r := range n {
		for k := range n {
			b[r*n+k] /= a[r*n+r]
		}
	}
	return b
}

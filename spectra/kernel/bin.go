package kernel

// A bin is what makes line k of n real samples out of the transform Z of the n/2 complex values
// that alternate samples make, halved before:
//
//	X[k] = (Z[k] + Z[n/2-k]*) + c (Z[k] - Z[n/2-k]*),  c = -i e^{-2πi·k/n}
//
// (Cooley, Lewis and Welch, J. Sound Vib. 12, 1970).
type bin struct {
	at, mirror int32 // where Z[k] and Z[n/2-k] stand, in floats
	re, im     float64
}

// newBins makes the bins of all n/2 + 1 lines; place says at which element a line of Z stands.
func newBins(n int, place []int) []bin {
	half := n / 2
	bins := make([]bin, half+1)
	for k := range bins {
		c := timesMinusI(unit(k, n))
		bins[k] = bin{
			at:     int32(place[k%half] * element),
			mirror: int32(place[(half-k)%half] * element),
			re:     real(c),
			im:     imag(c),
		}
	}
	return bins
}

func splitPlain(dst []complex128, stride int, z []float64, bins []bin) {
	for k, b := range bins {
		to := dst[k*stride:][:Lanes]
		z, mirror := z[b.at:][:element], z[b.mirror:][:element]
		for l := range to {
			zr, zi, mr, mi := z[l], z[l+Lanes], mirror[l], -mirror[l+Lanes]
			turned := times(complex(b.re, b.im), complex(zr-mr, zi-mi))
			to[l] = complex(zr+mr, zi+mi) + turned
		}
	}
}

package watch

import "math"

const (
	// outOfStructure is the mean sign of the power flow below which it goes out of the structure over most of
	// the band. On simulated rigs a healthy driving point had +1.0 and a reversed one -1.0.
	outOfStructure = -0.6

	// outAtPeaks is the same with each line weighed by Im H, so that resonances decide: there a skew in time of less
	// than a quarter of a period does not turn the flow, elsewhere a small one does.
	outAtPeaks = -0.7

	// significant is how many standard deviations Im H has to be from 0 on a line that counts: a sign
	// that is wrong by chance on 1 line in 700.
	significant = 3

	// leastSignificant is how few lines can be told from chance: all ten of one sign.
	leastSignificant = 10
)

// polarities finds the driving points at which power flows out of the structure: Im(s_a H_aa) >= 0 for
// accelerance at every frequency, since Re(mobility) >= 0 (terms of ISO 7626-1).
func (k *looker) polarities(dst []finding) []finding {
	for i, o := range k.layout.driving {
		if o < 0 {
			continue
		}
		var sum, lines, flows, sizes float64
		for n := range k.model.regular {
			s := k.residual(n, o)
			if s != s {
				continue
			}
			flow := k.layout.sign[i] * imag(k.model.at(n, o, i))
			// Half of the complex variance of H lies along Im.
			t := flow / math.Sqrt(s*k.inverse(n, i)/k.model.ne/2)
			if math.Abs(t) > significant {
				sum += math.Copysign(1, t)
				lines++
				flows += flow
				sizes += math.Abs(flow)
			}
		}
		if lines >= leastSignificant && sum < outOfStructure*lines && flows < outAtPeaks*sizes {
			dst = append(dst, finding{kind: PolaritySuspect, key: i, channels: []int{i, k.layout.q + o}})
		}
	}
	return dst
}

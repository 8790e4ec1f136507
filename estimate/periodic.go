package estimate

import (
	"math"
	"math/cmplx"

	"shakerwatch/spectra"
)

// differentPeriods are the frequency responses of one line from products of different periods.
//
// Of a random block with the periods X_1 to X_K, let Xa be the mean, Xa Xa^H its product and
// N = Σ_p (X_p - Xa)(X_p - Xa)^H / (K-1) the noise of one period. Since
// (K-1) N = Σ_p X_p X_p^H - K Xa Xa^H,
//
//	Xa Xa^H - N/K = Xa Xa^H (1 + 1/(K-1)) - Σ_p X_p X_p^H / (K(K-1))
//	              = [(Σ_p X_p)(Σ_p X_p)^H - Σ_p X_p X_p^H] / (K(K-1)),
//
// the mean of the products of all pairs of different periods, in which noise that is independent
// from period to period has no mean; likewise for Y X^H. So, with Nxx and Nyx from Snapshot.Noise,
//
//	Gxx_c = Gxx - Nxx/K,  Gyx_c = Gyx - Nyx/K,  H = Gyx_c Gxx_c^-1
//
// (Pintelon and Schoukens, System Identification, 2nd ed., 2012). Exponential weights, which the
// noise has not, keep the mean right but not the identity.
//
// To the second order H is too large by
//
//	H Cnn Gxx_c^-1 [q/K + tr(Gxx_c^-1 Cnn)/(K(K-1))] / n_e,
//
// Cnn the noise of the forces in one period, since a ratio of means is not the mean of a ratio: far
// less than the random error that Cnn makes. Averaging the periods without the correction leaves
// H Gxx_c (Gxx_c + Cnn/K)^-1, however many blocks.
//
// # Where forces are pure noise
//
// Gxx_c says nothing in a direction v in which no force acts: v^H Gxx v and v^H Nxx v/K are then two
// estimates of the same noise, and half the time their difference is positive. Seen behind the
// other q-1 directions, which take as many averages away, their ratio is (n_e-q+1)/n_e times
// F(2(n_e-q+1), 2M(K-1)). A line is regular when every direction stands out of that, that is when
// the smallest eigenvalue of
//
//	S^-1 (Gxx - c Nxx/K) S^-1,  S² the diagonal of Gxx,
//	c = max(1, F(2(n_e-q+1), 2M(K-1); 0.99) (n_e-q+1)/n_e),
//
// exceeds minEigenvalue; elsewhere H is NaN, and so it is while n_e <= q-1, thus while M < q. One
// line in a hundred without force passes by chance, fewer when several directions are without. A
// direction that passes has in Gxx_c at least c-1 times its noise, so no H is a division by nearly
// nothing.
type differentPeriods struct {
	regular bool // H can be had

	s     []float64    // (q) square roots of the diagonal of Gxx
	r     []complex128 // (q,q) scratch
	l     []complex128 // (q,q) S^-1 Gxx_c S^-1 = L L^H, lower triangle
	eigen []float64    // (q) scratch
	row   []complex128 // (q) scratch
	gains []noiseGain  // (q) see varianceTo

	bound noiseBound
}

func newDifferentPeriods(q int) *differentPeriods {
	return &differentPeriods{
		s:     make([]float64, q),
		r:     make([]complex128, q*q),
		l:     make([]complex128, q*q),
		eigen: make([]float64, q),
		row:   make([]complex128, q),
		gains: make([]noiseGain, q),
	}
}

// emptyChance is how often a direction without force passes for one with force: own choice. The
// price of a smaller chance is losing forces that are weak but there.
const emptyChance = 0.01

// A noiseBound is c, with what it was worked out from: it is the same on all lines.
type noiseBound struct {
	averages, periods int
	effective         float64
	c                 float64
}

// of gives c for s, NaN where there are too few averages for any.
func (b *noiseBound) of(s *spectra.Snapshot) float64 {
	if b.averages == s.Averages && b.periods == s.Periods && b.effective == s.EffectiveAverages && b.c != 0 {
		return b.c
	}
	b.averages, b.periods, b.effective, b.c = s.Averages, s.Periods, s.EffectiveAverages, math.NaN()
	free := s.EffectiveAverages - float64(s.Forces) + 1
	if free > 0 {
		b.c = max(1, noiseRatio(free, s, 1-emptyChance)*free/s.EffectiveAverages)
	}
	return b.c
}

// noiseRatio is the quantile at the given level of the ratio of two estimates of the same noise, one from
// free averages of the means of K periods, the other from the scatter between the periods of s:
// F(2 free, 2M(K-1)), two degrees of freedom a complex value.
func noiseRatio(free float64, s *spectra.Snapshot, level float64) float64 {
	return FQuantile(2*free, 2*float64(s.Averages)*float64(s.Periods-1), level)
}

// hTo writes the frequency responses of line k of s, which has periods, into h (p,q).
func (d *differentPeriods) hTo(h []complex128, s *spectra.Snapshot, k int) {
	d.factor(s, k)
	if !d.regular {
		fill(h, cmplx.NaN())
		return
	}
	q := s.Forces
	share := complex(1/float64(s.Periods), 0)
	for o := range s.Responses {
		at := (k*s.Responses + o) * q
		for i := range q {
			d.row[i] = divide(cmplx.Conj(s.Gyx[at+i]-share*s.Noise.Gyx[at+i]), d.s[i], 1)
		}
		d.solve(d.row)
		for i, v := range d.row {
			h[o*q+i] = divide(cmplx.Conj(v), d.s[i], 1)
		}
	}
}

// factor takes line k of s and decides whether it is regular.
func (d *differentPeriods) factor(s *spectra.Snapshot, k int) {
	q := s.Forces
	c := d.bound.of(s)
	for i := range q {
		d.s[i] = math.Sqrt(real(s.Gxx[(k*q+i)*q+i]))
	}
	d.scaled(s, k, c)
	eigenvalues(d.eigen, d.r)
	d.regular = d.eigen[q-1] > minEigenvalue
	if d.regular {
		d.scaled(s, k, 1)
		d.regular = cholesky(d.l, d.r, q)
	}
}

// scaled fills r with S^-1 (Gxx - c Nxx/K) S^-1. A silent force makes it NaN.
func (d *differentPeriods) scaled(s *spectra.Snapshot, k int, c float64) {
	q := s.Forces
	share := complex(c/float64(s.Periods), 0)
	for i := range q {
		for j := range q {
			n := (k*q+i)*q + j
			d.r[i*q+j] = divide(s.Gxx[n]-share*s.Noise.Gxx[n], d.s[i], d.s[j])
		}
	}
}

// solve replaces b by R^-1 b, R = S^-1 Gxx_c S^-1.
func (d *differentPeriods) solve(b []complex128) {
	solveLower(d.l, b)
	solveLowerAdjoint(d.l, b)
}

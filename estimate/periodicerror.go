package estimate

import (
	"math"
	"math/cmplx"

	"shakerwatch/spectra"
)

// A noiseGain is how much of a response's densities comes into the variance of H of one force.
type noiseGain struct {
	residual float64 // [Gxx_c^-1 Gxx Gxx_c^-1]_ii
	noise    float64 // [Gxx_c^-1 Nxx Gxx_c^-1]_ii
}

// varianceTo writes the complex variances, (m/s²/N)², of the frequency responses h (p,q) that hTo has just
// made of line k of s into dst (p,q):
//
//	Var(H_oi) = S [Gxx_c^-1 Gxx Gxx_c^-1]_ii / n_e + N [Gxx_c^-1 Nxx Gxx_c^-1]_ii / (n_e K²(K-1)),
//
// S the residual of response o with this H, residualDensity with Gyy, Gyx and Gxx, times n_e/(n_e-q), and N
// the noise of that residual in one period, residualDensity with Nyy, Nyx and Nxx. They are NaN unless
// n_e > q and H is known, and where the response is silent.
//
// It follows from the first order of H - H_true = Σ r_p X_l^H Gxx_c^-1 over all pairs p, l of different
// periods, with r_p = D + e_p the residual in period p, distortion D of density Sd, noise e_p of
// density N, and noise n_l on the forces. Its terms D X^H, e_p X^H, D n_l^H and e_p n_l^H are
// uncorrelated and add up, with S = Sd + N/K and Gxx = Gxx_c + Nxx/K, to
//
//	Sd Gxx_c + N/K Gxx_c + Sd Nxx/K + N Nxx/(K(K-1)) = S Gxx + N Nxx/(K²(K-1)).
//
// HVariance, which is for H1, is too small here: H1 bends towards the noise on the forces and so
// leaves a smaller residual than the true H, and its Gxx holds that noise. With one force and noise
// of density C on it alone, it is too small by the factor (1+ε)² (1+εK/(K-1)), ε = C/(K Gxx_c): 1.21
// for ε = 0.05 and K = 2. Its 90 % region then holds the truth in some 85 of 100 cases, that of this
// variance in 90.
func (d *differentPeriods) varianceTo(dst []float64, h []complex128, s *spectra.Snapshot, k int) {
	fill(dst, math.NaN())
	q, ne, periods := s.Forces, s.EffectiveAverages, float64(s.Periods)
	if !d.regular || !(ne > float64(q)) {
		return
	}
	d.fillGains(s, k)
	for o := range s.Responses {
		if s.Gyy[k*s.Responses+o] == 0 {
			continue
		}
		row := h[o*q : (o+1)*q]
		residual := residualAt(row, s, &s.Densities, k, o) / (ne - float64(q))
		noise := residualAt(row, s, &s.Noise, k, o) / (ne * periods * periods * (periods - 1))
		for i, gain := range d.gains {
			dst[o*q+i] = residual*gain.residual + noise*gain.noise
		}
	}
}

// fillGains works out the gains of line k, row by row of Gxx_c^-1.
func (d *differentPeriods) fillGains(s *spectra.Snapshot, k int) {
	q := s.Forces
	for i := range d.gains {
		fill(d.row, 0)
		d.row[i] = divide(1, d.s[i], 1)
		d.solve(d.row)
		for j, v := range d.row {
			d.row[j] = divide(cmplx.Conj(v), d.s[j], 1)
		}
		d.gains[i] = noiseGain{
			residual: quadratic(d.row, s.Gxx[k*q*q:(k+1)*q*q]),
			noise:    quadratic(d.row, s.Noise.Gxx[k*q*q:(k+1)*q*q]),
		}
	}
}

// residualAt is residualDensity of row h and response o at line k in the densities g of s, not below 0, where
// rounding could take it.
func residualAt(h []complex128, s *spectra.Snapshot, g *spectra.Densities, k, o int) float64 {
	q := s.Forces
	at := k*s.Responses + o
	return max(0, residualDensity(h, g.Gyy[at], g.Gyx[at*q:(at+1)*q], g.Gxx[k*q*q:(k+1)*q*q]))
}

// residualDensity is Gyy - 2 Re(H Gyx^H) + H Gxx H^H of row h (q) of H, with response o's gyx (q) and gyy and
// the forces' gxx (q,q): the density of what h leaves of the response.
func residualDensity(h []complex128, gyy float64, gyx, gxx []complex128) float64 {
	for i, v := range h {
		gyy -= 2 * real(v*cmplx.Conj(gyx[i]))
	}
	return gyy + quadratic(h, gxx)
}

// quadratic is h G h^H of the row h (q) and the Hermitian g (q,q), of which it reads the lower triangle.
func quadratic(h, g []complex128) float64 {
	var sum float64
	for i, hi := range h {
		var row complex128
		for j, hj := range h[:i] {
			row += g[i*len(h)+j] * cmplx.Conj(hj)
		}
		sum += 2*real(hi*row) + abs2(hi)*real(g[i*len(h)+i])
	}
	return sum
}

package estimate

import (
	"math"

	"shakerwatch/spectra"
)

// Distortion tells noise from nonlinear distortion in periodic excitation: what scatters between the
// periods of one random block is noise, what scatters between the blocks beyond that is distortion
// (Pintelon and Schoukens, System Identification, 2nd ed., 2012, robust method). Arrays lie line by
// line; L, p and q are the numbers of lines, responses and forces.
//
// The part of a nonlinearity that every random block bends in the same way is in H, which is the best
// linear approximation at these levels, and does not show here. What else differs from block to
// block does: a structure that drifts, or periods that had not settled.
type Distortion struct {
	spectra.Shape

	NoiseForce         []float64 // (L,q) noise of one period, N²/Hz
	NoiseResponse      []float64 // (L,p) noise of one period, (m/s²)²/Hz
	DistortionResponse []float64 // (L,p) in a block, however many periods it has, (m/s²)²/Hz

	// Chance is (L,p) what DistortionResponse stays below on 99 of 100 lines of a linear structure,
	// (m/s²)²/Hz.
	Chance []float64
}

// NewDistortion makes a Distortion for snapshots of the given shape.
func NewDistortion(shape spectra.Shape) *Distortion {
	l, p, q := shape.Lines, shape.Responses, shape.Forces
	return &Distortion{
		Shape:              shape,
		NoiseForce:         make([]float64, l*q),
		NoiseResponse:      make([]float64, l*p),
		DistortionResponse: make([]float64, l*p),
		Chance:             make([]float64, l*p),
	}
}

// distortionChance is how often a linear structure's distortion exceeds Distortion.Chance. Own choice.
const distortionChance = 0.01

// Update fills d from s and its estimates e, of which H must be differentPeriods' own. With Noise
// written N, K periods a block and densities those of s:
//
//	NoiseForce_i         = Nxx_ii
//	NoiseResponse_o      = Nyy_o
//	residual_o           = Gyy_o - 2 Re(H_o Gyx_o^H) + H_o Gxx H_o^H, not below 0
//	noise_o              = Nyy_o - 2 Re(H_o Nyx_o^H) + H_o Nxx H_o^H, not below 0
//	DistortionResponse_o = residual_o n_e/(n_e-q) - noise_o/K, not below 0
//	Chance_o             = noise_o/K (F(2(n_e-q), 2M(K-1); 0.99) - 1)
//
// The residual's noise is that of response and forces together: Nyy alone would take noise on the
// forces for distortion. The residual loses q of its n_e degrees of freedom to H, with this H too.
// Before it is cut at 0, DistortionResponse is too small in the mean, to the second order, by
//
//	τ/(n_e-q) [distortion_o/K + noise_o/(K(K-1))],  τ = tr(Gxx_c^-1 Nxx),
//
// τ being a hundredth a force with 10 % noise on the forces.
//
// Without distortion, residual and noise are independent estimates of the same density, one from
// the means and one from the deviations of the periods, and their ratio is F; noise on the forces
// near the bound of differentPeriods makes 1 line in 100 up to 3.
//
// All is NaN without blocks or periods; the last two are NaN where H is, and while n_e <= q, thus
// while M <= q. Update allocates nothing, and panics when s or e has another shape.
func (d *Distortion) Update(s *spectra.Snapshot, e *Estimates) {
	if s.Shape != d.Shape || e.Shape != d.Shape {
		panic("estimate: snapshot or estimates have another shape")
	}
	fill(d.DistortionResponse, math.NaN())
	fill(d.Chance, math.NaN())
	if s.Periods == 0 {
		fill(d.NoiseForce, math.NaN())
		fill(d.NoiseResponse, math.NaN())
		return
	}
	q := d.Forces
	for n := range d.NoiseForce {
		k, i := n/q, n%q
		d.NoiseForce[n] = real(s.Noise.Gxx[(k*q+i)*q+i])
	}
	copy(d.NoiseResponse, s.Noise.Gyy)
	d.distortion(s, e.H)
}

// distortion fills DistortionResponse and Chance.
func (d *Distortion) distortion(s *spectra.Snapshot, h []complex128) {
	q, ne, periods := d.Forces, s.EffectiveAverages, float64(s.Periods)
	free := ne - float64(q)
	if !(free > 0) {
		return
	}
	chance := noiseRatio(free, s, 1-distortionChance) - 1
	for n := range d.DistortionResponse {
		k, o := n/d.Responses, n%d.Responses
		row := h[n*q : (n+1)*q]
		noise := residualAt(row, s, &s.Noise, k, o) / periods
		d.DistortionResponse[n] = max(0, residualAt(row, s, &s.Densities, k, o)*ne/free-noise)
		d.Chance[n] = noise * chance
	}
}

package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/spectra"
)

// bordered is the matrix E[v v^H], v = [y; x], of response o at line k, with y over level and each x over
// its own.
func bordered(s *spectra.Snapshot, k, o int, level float64, levels []float64) []complex128 {
	q := s.Forces
	n := q + 1
	g := make([]complex128, n*n)
	g[0] = complex(s.Gyy[k*s.Responses+o]/level/level, 0)
	for i := range q {
		g[i+1] = divide(s.Gyx[(k*s.Responses+o)*q+i], level, levels[i])
		g[(i+1)*n] = cmplx.Conj(g[i+1])
		for j := range q {
			g[(i+1)*n+j+1] = divide(s.Gxx[(k*q+i)*q+j], levels[i], levels[j])
		}
	}
	return g
}

// byEigenvector is Hv from the definition, -conj(u_i/u_0), scaled back.
func byEigenvector(g []complex128, level float64, levels []float64) []complex128 {
	n := len(levels) + 1
	v := make([]complex128, n*n)
	diagonalise(g, v, n)
	least := 0
	for k := range n {
		if real(g[k*n+k]) < real(g[least*n+least]) {
			least = k
		}
	}
	h := make([]complex128, n-1)
	for i := range h {
		u, u0 := cmplx.Conj(v[least*n+i+1]), cmplx.Conj(v[least*n])
		h[i] = -cmplx.Conj(u/u0) * complex(level/levels[i], 0)
	}
	return h
}

// TestHVIsTheEigenvector compares with the eigenvector itself, whitened and not.
func TestHVIsTheEigenvector(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const p = 2
		q := rapid.IntRange(1, 5).Draw(t, "q")
		m := randomMade(newRand(t), 2, q, p, q+rapid.IntRange(0, 20).Draw(t, "more"))
		m.noise = rapid.SampledFrom([]float64{1e-6, 0.1, 0.5}).Draw(t, "noise")
		m.forceNoise = rapid.SampledFrom([]float64{0, 0.05}).Draw(t, "force noise")
		s := m.snapshot(newRand(t))
		var noiseForce, noiseResponse []float64
		if rapid.Bool().Draw(t, "whitened") {
			for range 2 * q {
				noiseForce = append(noiseForce, rapid.Float64Range(0.1, 10).Draw(t, "force density"))
			}
			for range 2 * p {
				noiseResponse = append(noiseResponse, rapid.Float64Range(0.1, 10).Draw(t, "response density"))
			}
		}
		e := by(HV, s, noiseForce, noiseResponse)
		for k := range s.Lines {
			for o := range p {
				level, levels := 1.0, slices.Repeat([]float64{1}, q)
				if noiseForce != nil {
					level = math.Sqrt(noiseResponse[k*p+o])
					for i := range levels {
						levels[i] = math.Sqrt(noiseForce[k*q+i])
					}
				}
				want := byEigenvector(bordered(s, k, o, level, levels), level, levels)
				got := e.H[(k*p+o)*q:][:q]
				for i := range q {
					if cmplx.Abs(got[i]-want[i]) > 1e-11*e.ForceConditionRaw[k]*largest(want) {
						t.Fatalf("line %d, response %d, force %d: Hv %v, want %v", k, o, i, got[i], want[i])
					}
				}
			}
		}
	})
}

func TestHVWithoutNoiseIsH(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		m := randomMade(newRand(t), 2, q, 3, q+4)
		m.noise = 0
		e := by(HV, m.snapshot(newRand(t)), nil, nil)
		for n, h := range e.H {
			if cmplx.Abs(h-m.h[n%len(m.h)]) > 1e-12*e.ForceConditionRaw[n/len(m.h)] {
				t.Fatalf("Hv is %v, want %v", h, m.h[n%len(m.h)])
			}
		}
	})
}

// TestWhitenedHVScalesBitForBit: whitened, Hv does not depend on units.
func TestWhitenedHVScalesBitForBit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const p = 2
		q := rapid.IntRange(1, 4).Draw(t, "q")
		s := randomMade(newRand(t), 1, q, p, 12).snapshot(newRand(t))
		noiseForce, noiseResponse := slices.Repeat([]float64{0.3}, q), slices.Repeat([]float64{0.7}, p)
		plain := by(HV, s, noiseForce, noiseResponse)
		force, response := rapid.IntRange(0, q-1).Draw(t, "force"), rapid.IntRange(0, p-1).Draw(t, "response")
		cx := math.Ldexp(1, rapid.IntRange(-20, 20).Draw(t, "force exponent"))
		cy := math.Ldexp(1, rapid.IntRange(-20, 20).Draw(t, "response exponent"))
		scaleForce(s, force, cx)
		scaleResponse(s, response, cy)
		noiseForce[force] *= cx * cx
		noiseResponse[response] *= cy * cy
		for n, got := range by(HV, s, noiseForce, noiseResponse).H {
			want := plain.H[n]
			if n%q == force {
				want = divide(want, cx, 1)
			}
			if n/q == response {
				want = complex(real(want)*cy, imag(want)*cy)
			}
			if got != want {
				t.Fatalf("scaled by %v and %v: %v, want exactly %v", cx, cy, got, want)
			}
		}
	})
}

// TestBalancedNoise: with noise on forces and responses alike, H1 is low by Sxx/(Sxx+N), H2 high
// by (|H|² Sxx+N)/(|H|² Sxx), and Hv, whitened by what the noise is, neither. One force: the factors are
// exact. Then three forces that depend on each other, where H1 is merely wrong.
func TestBalancedNoise(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	m := randomMade(rng, 3000, 1, 1, 60)
	m.h[0], m.mix[0] = cmplx.Rect(20, 1), 1
	m.noise, m.forceNoise = 10, 0.3 // signal 20 and 1: N/S is 0.25 and 0.09
	s := m.snapshot(rng)
	noiseForce, noiseResponse := slices.Repeat([]float64{0.09}, 3000), slices.Repeat([]float64{100.0}, 3000)
	for _, test := range []struct {
		name, estimator string
		whiten          bool
		want            float64
	}{
		{"H1", H1, false, 1 / 1.09}, {"H2", H2, false, 1.25}, {"Hv whitened", HV, true, 1},
		// λ of [500 20; 20 1.09], then H = 20/(1.09 - λ), by hand.
		{"Hv unscaled", HV, false, 1 / (1.09 - unscaledLambda())},
	} {
		e := by(test.estimator, s, nil, nil)
		if test.whiten {
			e = by(test.estimator, s, noiseForce, noiseResponse)
		}
		// A line scatters by some 0.08, their mean by 0.0015; the mean of a quotient of 60 averages is off by up to 1/60 of 0.25.
		if got := meanRatio(e, m.h); cmplx.Abs(got-complex(test.want, 0)) > 0.008 {
			t.Errorf("%s is %.4f of the truth, want %.4f", test.name, got, test.want)
		}
	}

	m = randomMade(rng, 1000, 3, 2, 100)
	m.noise, m.forceNoise = 0.6, 0.3
	s = m.snapshot(rng)
	noiseForce, noiseResponse = slices.Repeat([]float64{0.09}, 3000), slices.Repeat([]float64{0.36}, 2000)
	h1, hv := furthest(by(H1, s, nil, nil), m.h), furthest(by(HV, s, noiseForce, noiseResponse), m.h)
	t.Logf("three forces: mean of H1 is off by up to %.3f, of whitened Hv by %.3f", h1, hv)
	if hv > 0.03 || h1 < 3*hv {
		t.Errorf("three forces: mean of H1 is off by up to %.3f, of whitened Hv by %.3f", h1, hv)
	}
}

func unscaledLambda() float64 {
	const gyy, gxx = 500, 1.09
	return (gyy + gxx - math.Sqrt((gyy-gxx)*(gyy-gxx)+4*400)) / 2
}

// meanRatio is the mean over all lines of the first H over its truth.
func meanRatio(e *Estimates, truth []complex128) complex128 {
	var sum complex128
	for k := range e.Lines {
		sum += e.H[k*len(truth)] / truth[0]
	}
	return sum / complex(float64(e.Lines), 0)
}

// furthest is how far the means over all lines of the frequency responses are off their truth.
func furthest(e *Estimates, truth []complex128) float64 {
	off := make([]complex128, len(truth))
	for n, h := range e.H {
		off[n%len(truth)] += (h - truth[n%len(truth)]) / complex(float64(e.Lines), 0)
	}
	return largest(off)
}

func TestHVUnknown(t *testing.T) {
	type rows [2]bool
	for _, test := range []struct {
		name   string
		change func(s *spectra.Snapshot, noiseForce, noiseResponse []float64)
		known  rows
	}{
		{"as it is", func(*spectra.Snapshot, []float64, []float64) {}, rows{true, true}},
		{"a force's noise is zero", func(_ *spectra.Snapshot, x, _ []float64) { x[1] = 0 }, rows{}},
		{"a force's noise is no number", func(_ *spectra.Snapshot, x, _ []float64) { x[0] = math.NaN() }, rows{}},
		{"a response's noise is zero", func(_ *spectra.Snapshot, _, y []float64) { y[0] = 0 }, rows{false, true}},
		{"a response's noise is no number", func(_ *spectra.Snapshot, _, y []float64) { y[1] = math.NaN() }, rows{true, false}},
		{"a response's noise is infinite", func(_ *spectra.Snapshot, _, y []float64) { y[1] = math.Inf(1) }, rows{true, false}},
		{"a response's noise is negative", func(_ *spectra.Snapshot, _, y []float64) { y[1] = -1 }, rows{true, false}},
		{"a response without relation that is louder than the forces", func(s *spectra.Snapshot, _, _ []float64) {
			s.Gyx[0], s.Gyx[1], s.Gyy[0] = 0, 0, 1e6
		}, rows{false, true}},
		{"an infinite response", func(s *spectra.Snapshot, _, _ []float64) { s.Gyy[1] = math.Inf(1) }, rows{true, false}},
		{"fewer blocks than forces", func(s *spectra.Snapshot, _, _ []float64) { s.Averages = 1 }, rows{}},
		{"a silent force", func(s *spectra.Snapshot, _, _ []float64) {
			s.Gxx[1], s.Gxx[2], s.Gxx[3], s.Gyx[1], s.Gyx[3] = 0, 0, 0, 0, 0
		}, rows{}},
		{"a silent response, whose H is 0", func(s *spectra.Snapshot, _, _ []float64) {
			s.Gyx[0], s.Gyx[1], s.Gyy[0] = 0, 0, 0
		}, rows{true, true}},
	} {
		t.Run(test.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(1, 2))
			s := randomMade(rng, 1, 2, 2, 9).snapshot(rng)
			noiseForce, noiseResponse := []float64{1, 2}, []float64{3, 4}
			test.change(s, noiseForce, noiseResponse)
			e := by(HV, s, noiseForce, noiseResponse)
			for n, h := range e.H {
				if known := !cmplx.IsNaN(h); known != test.known[n/2] {
					t.Errorf("H[%d] is %v", n, h)
				}
			}
			if test.name == "a silent response, whose H is 0" && (e.H[0] != 0 || e.H[1] != 0) {
				t.Errorf("H of a silent response is %v", e.H[:2])
			}
		})
	}
}

// TestSmallestBordered compares with Jacobi's method, far from the pole and close to it.
func TestSmallestBordered(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 6).Draw(t, "q")
		values, power := make([]float64, q), make([]float64, q)
		explained := 0.0
		for i := range q {
			values[i] = rapid.Float64Range(0.01, 100).Draw(t, "value")
			power[i] = math.Pow(10, rapid.Float64Range(-20, 2).Draw(t, "power"))
			explained += power[i] / values[i]
		}
		gyy := explained + math.Pow(10, rapid.Float64Range(-15, 6).Draw(t, "left"))
		n := q + 1
		a := make([]complex128, n*n)
		a[0] = complex(gyy, 0)
		for i := range q {
			a[i+1], a[(i+1)*n] = complex(math.Sqrt(power[i]), 0), complex(math.Sqrt(power[i]), 0)
			a[(i+1)*n+i+1] = complex(values[i], 0)
		}
		all := make([]float64, n)
		eigenvalues(all, a)
		got := smallestBordered(gyy, power, values)
		if math.IsNaN(got) {
			got = slices.Min(values)
		}
		// Jacobi's own rounding is that of the matrix; of the root, that of Gyy.
		if want := all[n-1]; math.Abs(got-want) > 1e-13*(slices.Max(values)+explained)+1e-14*slices.Min(values) {
			t.Fatalf("smallest eigenvalue %v, want %v", got, want)
		}
	})
}

package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"

	"shakerwatch/spectra"
)

func newRand(t *rapid.T) *rand.Rand {
	return rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 7))
}

func TestH1IsExactWithoutNoise(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 5).Draw(t, "q")
		m := randomMade(newRand(t), 4, q, 3, q+4)
		m.noise = 0
		e := estimatesOf(m.snapshot(newRand(t)), nil)
		for k := range e.Lines {
			for n, want := range m.h {
				got := e.H[k*len(m.h)+n]
				// The condition of the forces costs digits.
				if cmplx.Abs(got-want) > 1e-13*e.ForceConditionRaw[k]*10 {
					t.Fatalf("line %d, frequency response %d: %v, want %v", k, n, got, want)
				}
			}
			for o := range 3 {
				if g2 := e.MultipleCoherence[k*3+o]; math.Abs(g2-1) > 1e-9 {
					t.Fatalf("multiple coherence %v without noise, want 1", g2)
				}
			}
		}
	})
}

// determinant by elimination without pivots, enough for positive definite matrices.
func determinant(a []complex128, n int) float64 {
	a = append([]complex128{}, a...)
	det := complex(1, 0)
	for i := range n {
		det *= a[i*n+i]
		for r := i + 1; r < n; r++ {
			f := a[r*n+i] / a[i*n+i]
			for c := i; c < n; c++ {
				a[r*n+c] -= f * a[i*n+c]
			}
		}
	}
	return real(det)
}

// TestMultipleCoherenceIsTheDeterminantForm: 1 - det(G of [y; x]) / (Gyy det Gxx), Bendat and
// Piersol, Random Data, 4th ed., 2010.
func TestMultipleCoherenceIsTheDeterminantForm(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		m := randomMade(newRand(t), 3, q, 2, q+rapid.IntRange(1, 20).Draw(t, "more"))
		s := m.snapshot(newRand(t))
		e := estimatesOf(s, nil)
		for k := range e.Lines {
			gxx := s.Gxx[k*q*q:][:q*q]
			for o := range 2 {
				n := q + 1
				g := make([]complex128, n*n)
				g[0] = complex(s.Gyy[k*2+o], 0)
				for i := range q {
					g[i+1] = s.Gyx[(k*2+o)*q+i]
					g[(i+1)*n] = cmplx.Conj(g[i+1])
					copy(g[(i+1)*n+1:], gxx[i*q:(i+1)*q])
				}
				want := 1 - determinant(g, n)/(s.Gyy[k*2+o]*determinant(gxx, q))
				got := e.MultipleCoherence[k*2+o]
				if math.Abs(got-want) > 1e-9*e.ForceCondition[k] {
					t.Fatalf("multiple coherence %v, want %v", got, want)
				}
				if got < 0 || got > 1 {
					t.Fatalf("multiple coherence %v lies outside [0, 1]", got)
				}
			}
		}
	})
}

// TestMultipleCoherenceOfUnrelatedNoise: with no true relation it follows Beta(q, n - q), mean q/n.
// The 95 % points are quantiles of that distribution, from SciPy's beta.ppf.
func TestMultipleCoherenceOfUnrelatedNoise(t *testing.T) {
	for _, test := range []struct {
		q, n  int
		point float64
	}{{2, 30, 0.1534}, {3, 30, 0.2016}, {4, 64, 0.1185}} {
		if got := (distuv.Beta{Alpha: float64(test.q), Beta: float64(test.n - test.q)}).Quantile(0.95); math.Abs(got-test.point) > 5e-5 {
			t.Errorf("95 %% point with q = %d, n = %d: %.4f, want %.4f", test.q, test.n, got, test.point)
		}
		rng := rand.New(rand.NewPCG(1, uint64(test.q)))
		m := randomMade(rng, 4000, test.q, 1, test.n)
		clear(m.h)
		e := estimatesOf(m.snapshot(rng), nil)
		var sum, below float64
		for _, g2 := range e.MultipleCoherence {
			sum += g2
			if g2 <= test.point {
				below++
			}
		}
		lines := float64(e.Lines)
		mean := float64(test.q) / float64(test.n)
		if got := sum / lines; math.Abs(got-mean) > 0.03*mean { // four deviations of the mean of 4000
			t.Errorf("q = %d, n = %d: mean %.5f, want %.5f", test.q, test.n, got, mean)
		}
		if got := below / lines; math.Abs(got-0.95) > 0.014 { // four deviations of a share of 4000
			t.Errorf("q = %d, n = %d: %.3f below the 95 %% point", test.q, test.n, got)
		}
	}
}

// TestRandomErrorOfOneForce: sqrt(1-g2) / (g sqrt(2n)) is 0.050 for g2 = 0.8 and n = 50 (Bendat and
// Piersol, Random Data, 4th ed., 2010); the unbiased form divides by n - 1.
func TestRandomErrorOfOneForce(t *testing.T) {
	const g2, n = 0.8, 50
	h := complex(3, 4)
	gxx := 2.0
	gyy := abs2(h) * gxx / g2
	got := RelativeError(HVariance(gyy, g2, 1/gxx, 1, n+1), h)
	if math.Abs(got-0.050) > 1e-12 {
		t.Errorf("random error %v, want 0.050", got)
	}
}

// TestRandomErrorIsTheScatter compares the predicted scatter of |H| with the one over many
// independent lines.
func TestRandomErrorIsTheScatter(t *testing.T) {
	for _, q := range []int{1, 2, 3} {
		rng := rand.New(rand.NewPCG(11, uint64(q)))
		m := randomMade(rng, 6000, q, 1, 24)
		e := estimatesOf(m.snapshot(rng), nil)
		for i := range q {
			var measured, predicted float64
			truth := cmplx.Abs(m.h[i])
			for k := range e.Lines {
				d := cmplx.Abs(e.H[k*q+i]) - truth
				measured += d * d
				sd := e.RandomError[k*q+i] * cmplx.Abs(e.H[k*q+i])
				predicted += sd * sd
			}
			// The scatter of a variance of 6000 values is 2 %; curvature of |H| adds a few percent.
			if ratio := measured / predicted; ratio < 0.90 || ratio > 1.12 {
				t.Errorf("q = %d, force %d: measured variance is %.3f of the predicted one", q, i, ratio)
			}
		}
	}
}

func TestScalingAForceScalesH(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		s := randomMade(newRand(t), 2, q, 2, 12).snapshot(newRand(t))
		plain := estimatesOf(s, nil)
		i := rapid.IntRange(0, q-1).Draw(t, "force")
		c := rapid.SampledFrom([]float64{1.0 / 1024, 0.5, 8, 3, 0.7, 1e6}).Draw(t, "c")
		for k := range s.Lines {
			for j := range q {
				s.Gxx[(k*q+i)*q+j] *= complex(c, 0)
				s.Gxx[(k*q+j)*q+i] *= complex(c, 0)
			}
			for o := range 2 {
				s.Gyx[(k*2+o)*q+i] *= complex(c, 0)
			}
		}
		scaled := estimatesOf(s, nil)
		_, exponent := math.Frexp(c)
		exact := c == math.Ldexp(0.5, exponent)
		for n := range plain.H {
			want := plain.H[n]
			if n%q == i {
				want = complex(real(want)/c, imag(want)/c)
			}
			got := scaled.H[n]
			if exact && got != want {
				t.Fatalf("scaled by %v: %v, want exactly %v", c, got, want)
			}
			if cmplx.Abs(got-want) > 1e-12*plain.ForceCondition[0]*cmplx.Abs(want)+1e-12 {
				t.Fatalf("scaled by %v: %v, want %v", c, got, want)
			}
		}
		for n, g2 := range plain.MultipleCoherence {
			if math.Abs(scaled.MultipleCoherence[n]-g2) > 1e-12 {
				t.Fatalf("multiple coherence %v, want %v as before", scaled.MultipleCoherence[n], g2)
			}
		}
	})
}

func TestSwappingForcesSwapsResults(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const q = 3
		s := randomMade(newRand(t), 2, q, 2, 12).snapshot(newRand(t))
		plain := estimatesOf(s, nil)
		order := rapid.Permutation([]int{0, 1, 2}).Draw(t, "order")
		swapped := spectra.NewSnapshot(s.Shape, spectra.Averaging{})
		*swapped = *s
		swapped.Gxx, swapped.Gyx = make([]complex128, len(s.Gxx)), make([]complex128, len(s.Gyx))
		for k := range s.Lines {
			for i := range q {
				for j := range q {
					swapped.Gxx[(k*q+i)*q+j] = s.Gxx[(k*q+order[i])*q+order[j]]
				}
				for o := range 2 {
					swapped.Gyx[(k*2+o)*q+i] = s.Gyx[(k*2+o)*q+order[i]]
				}
			}
		}
		got := estimatesOf(swapped, nil)
		for n := range got.H {
			from := n/q*q + order[n%q]
			if cmplx.Abs(got.H[n]-plain.H[from]) > 1e-11*plain.ForceConditionRaw[0] {
				t.Fatalf("H[%d] = %v, want %v", n, got.H[n], plain.H[from])
			}
			if math.Abs(got.RandomError[n]/plain.RandomError[from]-1) > 1e-9 {
				t.Fatalf("random error %v, want %v", got.RandomError[n], plain.RandomError[from])
			}
		}
	})
}

func TestForcesAlone(t *testing.T) {
	// Two forces of levels 4 and 1 with coherence 0.36: R = [1 0.6; 0.6 1], so the condition is
	// 1.6/0.4 = 4 and each force's coherence 0.36; Gxx = [4 1.2; 1.2 1] has the eigenvalues
	// (5 ± sqrt(9 + 5.76))/2. Worked out by hand.
	s := spectra.NewSnapshot(spectra.Shape{Lines: 1, Forces: 2, Responses: 1}, spectra.Averaging{})
	s.Averages, s.EffectiveAverages = 10, 10
	copy(s.Gxx, []complex128{4, 1.2i, -1.2i, 1})
	s.Gyy[0] = 1
	e := estimatesOf(s, nil)
	root := math.Sqrt(9 + 5.76)
	for name, v := range map[string][2]float64{
		"condition":           {e.ForceCondition[0], 4},
		"raw condition":       {e.ForceConditionRaw[0], (5 + root) / (5 - root)},
		"coherence of first":  {e.ForceCoherence[0], 0.36},
		"coherence of second": {e.ForceCoherence[1], 0.36},
		"first principal":     {e.PrincipalForces[0], (5 + root) / 2},
		"second principal":    {e.PrincipalForces[1], (5 - root) / 2},
	} {
		if math.Abs(v[0]-v[1]) > 1e-13*v[1] {
			t.Errorf("%s %v, want %v", name, v[0], v[1])
		}
	}
}

func TestReciprocityWithSigns(t *testing.T) {
	// Three forces; the second has no driving point. Forces 0 and 2 have theirs at responses 1 and 0,
	// the latter with the opposite axis sign.
	points := []DrivingPoint{{Response: 1, Sign: 1}, {Response: -1}, {Response: 0, Sign: -1}}
	m := randomMade(rand.New(rand.NewPCG(5, 6)), 2, 3, 2, 12)
	m.noise = 0
	m.h[1*3+2] = 2 + 1i  // at the point of force 0, to force 2
	m.h[0*3+0] = -2 - 1i // at the point of force 2, to force 0, seen by a reversed sensor
	s := m.snapshot(rand.New(rand.NewPCG(8, 9)))
	e := estimatesOf(s, points)
	if len(e.ReciprocityPairs) != 1 || e.ReciprocityPairs[0] != [2]int{0, 2} {
		t.Fatalf("pairs %v, want [0 2]", e.ReciprocityPairs)
	}
	for _, v := range e.ReciprocityError {
		if !(v < 1e-10) {
			t.Errorf("reciprocity error %v of a reciprocal structure", v)
		}
	}
	points[2].Sign = 1
	for _, v := range estimatesOf(s, points).ReciprocityError {
		if math.Abs(v-2) > 1e-10 {
			t.Errorf("reciprocity error %v with a wrong sign, want 2", v)
		}
	}
}

func TestSkewTurnsThePhase(t *testing.T) {
	// A delay of one frame at 4096 frames/s turns the phase by 360·100/4096 = 8.79 degrees at
	// 100 Hz: the error is the chord 2 sin(phase/2).
	phase := 2 * math.Pi * 100 / 4096
	if deg := phase * 180 / math.Pi; math.Abs(deg-8.79) > 0.005 {
		t.Errorf("phase %.3f degrees", deg)
	}
	h := 3 - 2i
	if got, want := reciprocityError(h, h*cmplx.Rect(1, phase)), 2*math.Sin(phase/2); math.Abs(got-want) > 1e-12 {
		t.Errorf("reciprocity error %v, want %v", got, want)
	}
}

// TestPeriodsTakeTheNoiseOut: where the average has periods, H = Gyx / (Gxx - Nxx/K), and error and radius
// go with the variance that this H has.
func TestPeriodsTakeTheNoiseOut(t *testing.T) {
	m := randomMade(rand.New(rand.NewPCG(1, 1)), 3, 1, 1, 20)
	m.averaging.Periods = 2
	s := m.snapshot(rand.New(rand.NewPCG(2, 2)))
	for k, v := range s.Gxx {
		s.Noise.Gxx[k] = 0.2 * v
	}
	e, h1 := by("", s, nil, nil), estimatesOf(s, nil)
	for k, h := range e.H {
		if want := h1.H[k] / 0.9; cmplx.Abs(h-want) > 1e-13*cmplx.Abs(want) {
			t.Errorf("H is %v, want %v", h, want)
		}
		deviation := e.RandomError[k] * cmplx.Abs(h)
		if want := math.Sqrt(2*RegionFactor(1, 20, DefaultLevel, false)) * deviation; math.Abs(e.ConfidenceRadius[k]/want-1) > 1e-12 {
			t.Errorf("radius %v, want %v", e.ConfidenceRadius[k], want)
		}
		if e.ConfidenceRadius[k] < 1.1*h1.ConfidenceRadius[k] {
			t.Errorf("radius %v, by H1 %v: noise on the force costs nothing", e.ConfidenceRadius[k], h1.ConfidenceRadius[k])
		}
	}
}

func TestUpdateAllocatesNothing(t *testing.T) {
	m := randomMade(rand.New(rand.NewPCG(1, 1)), 50, 3, 3, 20)
	m.averaging.Pairs = allPairs(3)
	s := m.snapshot(rand.New(rand.NewPCG(2, 2)))
	noise := slices.Repeat([]float64{1}, 150)
	for _, method := range []Method{
		{Estimator: H1}, {Estimator: H2}, {Estimator: HV}, {Estimator: HV, NoiseForce: noise, NoiseResponse: noise}, {Simultaneous: true},
	} {
		method.Points, method.Averaging = noPoints(3), s.Averaging
		e := New(s.Shape, method)
		if allocs := testing.AllocsPerRun(20, func() { e.Update(s) }); allocs != 0 {
			t.Errorf("%s, whitened %v: %v allocations an update, want none", method.Estimator, method.whitens(), allocs)
		}
	}
}

func BenchmarkUpdate(b *testing.B) {
	for _, size := range []struct {
		name        string
		lines, q, p int
		estimator   string
	}{{"2x12", 1601, 2, 12, H1}, {"8x504", 801, 8, 504, H1}, {"8x8 h2", 801, 8, 8, H2}, {"2x12 hv", 1601, 2, 12, HV}, {"8x504 hv", 801, 8, 504, HV}} {
		b.Run(size.name, func(b *testing.B) {
			m := randomMade(rand.New(rand.NewPCG(1, 1)), size.lines, size.q, size.p, 10)
			if size.estimator == H2 {
				m.averaging.Pairs = allPairs(size.p)
			}
			s := m.snapshot(rand.New(rand.NewPCG(2, 2)))
			e := New(s.Shape, Method{Points: noPoints(size.q), Estimator: size.estimator, Averaging: s.Averaging})
			for b.Loop() {
				e.Update(s)
			}
		})
	}
}

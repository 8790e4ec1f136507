package estimate

import (
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/spectra"
)

// without is s without force i.
func without(s *spectra.Snapshot, i int) *spectra.Snapshot {
	q := s.Forces
	shape := s.Shape
	shape.Forces--
	less := spectra.NewSnapshot(shape, spectra.Averaging{})
	less.Averages, less.EffectiveAverages = s.Averages, s.EffectiveAverages
	copy(less.Gyy, s.Gyy)
	less.Gxx, less.Gyx = less.Gxx[:0], less.Gyx[:0]
	for n, v := range s.Gxx {
		if n%q != i && n/q%q != i {
			less.Gxx = append(less.Gxx, v)
		}
	}
	for n, v := range s.Gyx {
		if n%q != i {
			less.Gyx = append(less.Gyx, v)
		}
	}
	return less
}

// removed is the ordinary coherence of response o and force i at line k after all other forces are
// taken out of both by elimination, one after the other: conditioned spectra, Bendat and Piersol,
// Random Data, 4th ed., 2010.
func removed(s *spectra.Snapshot, k, o, i int) float64 {
	q := s.Forces
	n := q + 1
	g := make([]complex128, n*n) // of [y; x]
	g[0] = complex(s.Gyy[k*s.Responses+o], 0)
	for a := range q {
		g[a+1] = s.Gyx[(k*s.Responses+o)*q+a]
		g[(a+1)*n] = cmplx.Conj(g[a+1])
		copy(g[(a+1)*n+1:], s.Gxx[(k*q+a)*q:][:q])
	}
	for j := 1; j <= q; j++ {
		if j == i+1 {
			continue
		}
		before := append([]complex128{}, g...)
		for a := range n {
			for b := range n {
				g[a*n+b] -= before[a*n+j] * before[j*n+b] / before[j*n+j]
			}
		}
	}
	return abs2(g[i+1]) / (real(g[0]) * real(g[(i+1)*n+i+1]))
}

// TestPartialCoherenceIsWhatItSays compares with the definition in two ways: by removing the other
// forces, and by (g2 - g2_without_i) / (1 - g2_without_i).
func TestPartialCoherenceIsWhatItSays(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(2, 5).Draw(t, "q")
		s := randomMade(newRand(t), 2, q, 2, q+rapid.IntRange(1, 20).Draw(t, "more")).snapshot(newRand(t))
		e := estimatesOf(s, nil)
		for i := range q {
			less := estimatesOf(without(s, i), nil)
			for n, g2 := range e.MultipleCoherence {
				k, o := n/2, n%2
				got := e.PartialCoherence[n*q+i]
				tolerance := 1e-10 * e.ForceConditionRaw[k]
				if want := removed(s, k, o, i); math.Abs(got-want) > tolerance {
					t.Fatalf("partial coherence %v, want %v by removing the others", got, want)
				}
				rest := less.MultipleCoherence[n]
				if want := (g2 - rest) / (1 - rest); math.Abs(got-want) > tolerance/(1-rest) {
					t.Fatalf("partial coherence %v, want %v from the multiple coherences", got, want)
				}
				if got < 0 || got > 1 {
					t.Fatalf("partial coherence %v lies outside [0, 1]", got)
				}
			}
		}
	})
}

func TestPartialCoherenceOfOneForceIsTheMultipleOne(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := randomMade(newRand(t), 3, 1, 2, rapid.IntRange(2, 30).Draw(t, "n")).snapshot(newRand(t))
		e := estimatesOf(s, nil)
		for n, g2 := range e.MultipleCoherence {
			if got := e.PartialCoherence[n]; math.Abs(got-g2) > 1e-13 {
				t.Fatalf("partial coherence %v, multiple coherence %v", got, g2)
			}
		}
	})
}

// TestPartialCoherenceByHand: two independent forces of density 2 and 8, y = x0 + x1/2 and noise of
// density 1, so Gyy = 2 + 2 + 1 and g2 = 4/5; each force explains 2 of the 3 that the other one leaves.
func TestPartialCoherenceByHand(t *testing.T) {
	s := spectra.NewSnapshot(spectra.Shape{Lines: 1, Forces: 2, Responses: 1}, spectra.Averaging{})
	s.Averages, s.EffectiveAverages = 10, 10
	copy(s.Gxx, []complex128{2, 0, 0, 8})
	copy(s.Gyx, []complex128{2, 4})
	s.Gyy[0] = 5
	e := estimatesOf(s, nil)
	if math.Abs(e.MultipleCoherence[0]-0.8) > 1e-15 {
		t.Errorf("multiple coherence %v, want 4/5", e.MultipleCoherence[0])
	}
	for i, got := range e.PartialCoherence {
		if math.Abs(got-2.0/3) > 1e-15 {
			t.Errorf("partial coherence of force %d: %v, want 2/3", i, got)
		}
	}
}

func TestPartialCoherenceIsByH1Always(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		m := randomMade(newRand(t), 2, q, q, q+8)
		m.averaging.Pairs = allPairs(q)
		s := m.snapshot(newRand(t))
		want := by(H1, s, nil, nil)
		for _, estimator := range []string{H2, HV} {
			got := by(estimator, s, nil, nil)
			for n := range want.PartialCoherence {
				if got.PartialCoherence[n] != want.PartialCoherence[n] || got.MultipleCoherence[n/q] != want.MultipleCoherence[n/q] ||
					got.ConfidenceRadius[n] != want.ConfidenceRadius[n] {
					t.Fatalf("%s changes what is by H1", estimator)
				}
				if size := cmplx.Abs(got.H[n]) * got.RandomError[n]; math.Abs(size/(cmplx.Abs(want.H[n])*want.RandomError[n])-1) > 1e-12 {
					t.Fatalf("%s: the random error is not relative to its own |H|", estimator)
				}
			}
		}
	})
}

func TestPartialCoherenceWithoutNoiseIsOneOrUnknown(t *testing.T) {
	for _, test := range []struct {
		name string
		h1   complex128
		want float64
	}{{"driven", 2i, 1}, {"not driven", 0, math.NaN()}} {
		if got := PartialCoherence(test.h1, 3, 1, 2); got != test.want && !(math.IsNaN(got) && math.IsNaN(test.want)) {
			t.Errorf("%s: %v, want %v", test.name, got, test.want)
		}
	}
}

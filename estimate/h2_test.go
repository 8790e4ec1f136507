package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/spectra"
)

// square is a made measurement with as many responses as forces, all pairs of responses kept.
func square(t *rapid.T, q, blocks int) made {
	m := randomMade(newRand(t), 2, q, q, blocks)
	m.averaging.Pairs = allPairs(q)
	return m
}

// TestH2IsByDefinition: H2 Gxy is Gyy, all of it.
func TestH2IsByDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 5).Draw(t, "q")
		s := square(t, q, q+rapid.IntRange(0, 20).Draw(t, "more")).snapshot(newRand(t))
		e := by(H2, s, nil, nil)
		for k := range s.Lines {
			for o := range q {
				for n := range q {
					want := complex(s.Gyy[k*q+o], 0)
					for at, pair := range s.Pairs {
						v := s.GyyPairs[k*len(s.Pairs)+at]
						if pair == [2]int{o, n} {
							want = v
						} else if pair == [2]int{n, o} {
							want = cmplx.Conj(v)
						}
					}
					left, size := -want, 1.0
					for i := range q {
						left += e.H[(k*q+o)*q+i] * cmplx.Conj(s.Gyx[(k*q+n)*q+i])
						size = max(size, cmplx.Abs(e.H[(k*q+o)*q+i]))
					}
					if cmplx.Abs(left) > 1e-11*size {
						t.Fatalf("H2 Gxy - Gyy is %v at %d,%d", left, o, n)
					}
				}
			}
		}
	})
}

func TestH2IsExactWithNoiseOnTheForcesOnly(t *testing.T) {
	// H2 is right where the responses are free of noise: its mean over many lines comes to the truth
	// while H1 stays low by Sxx/(Sxx+N) = 1/1.25. q = 1, so that the noise biases H1 by a plain factor.
	rng := rand.New(rand.NewPCG(3, 4))
	m := randomMade(rng, 2000, 1, 1, 40)
	m.noise, m.forceNoise, m.mix[0] = 0, 0.5, 1
	s := m.snapshot(rng)
	for _, test := range []struct {
		estimator string
		want      float64
	}{{H1, 0.8}, {H2, 1}} {
		var sum complex128
		e := by(test.estimator, s, nil, nil)
		for _, h := range e.H {
			sum += h / m.h[0]
		}
		// A line scatters by some 0.08, their mean by 0.002; a ratio of means of 40 is biased by 1/40 of that square.
		if got := sum / complex(float64(e.Lines), 0); cmplx.Abs(got-complex(test.want, 0)) > 0.01 {
			t.Errorf("%s is %.4f of the truth, want %v", test.estimator, got, test.want)
		}
	}
}

func TestH2WithoutNoiseIsH(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		m := square(t, q, q+4)
		m.noise = 0
		for i := range q {
			m.h[i*q+i] += 4 // far from singular
		}
		e := by(H2, m.snapshot(newRand(t)), nil, nil)
		for n, h := range e.H {
			if cmplx.Abs(h-m.h[n%(q*q)]) > 1e-11*e.ForceConditionRaw[n/(q*q)] {
				t.Fatalf("H2 is %v, want %v", h, m.h[n%(q*q)])
			}
		}
	})
}

func TestH2ScalesBitForBit(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		q := rapid.IntRange(1, 4).Draw(t, "q")
		s := square(t, q, 12).snapshot(newRand(t))
		plain := by(H2, s, nil, nil)
		force, response := rapid.IntRange(0, q-1).Draw(t, "force"), rapid.IntRange(0, q-1).Draw(t, "response")
		cx := math.Ldexp(1, rapid.IntRange(-20, 20).Draw(t, "force exponent"))
		cy := math.Ldexp(1, rapid.IntRange(-20, 20).Draw(t, "response exponent"))
		scaleForce(s, force, cx)
		scaleResponse(s, response, cy)
		for n, got := range by(H2, s, nil, nil).H {
			want := plain.H[n]
			if n%q == force {
				want = divide(want, cx, 1)
			}
			if n/q%q == response {
				want = complex(real(want)*cy, imag(want)*cy)
			}
			if got != want {
				t.Fatalf("scaled by %v and %v: %v, want exactly %v", cx, cy, got, want)
			}
		}
	})
}

// scaleForce scales force i of s by c.
func scaleForce(s *spectra.Snapshot, i int, c float64) {
	q := s.Forces
	for n := range s.Gxx {
		if n%q == i {
			s.Gxx[n] *= complex(c, 0)
		}
		if n/q%q == i {
			s.Gxx[n] *= complex(c, 0)
		}
	}
	for n := range s.Gyx {
		if n%q == i {
			s.Gyx[n] *= complex(c, 0)
		}
	}
}

// scaleResponse scales response o of s by c.
func scaleResponse(s *spectra.Snapshot, o int, c float64) {
	p, q, pairs := s.Responses, s.Forces, len(s.Pairs)
	for n := range s.Gyx {
		if n/q%p == o {
			s.Gyx[n] *= complex(c, 0)
		}
	}
	for n := range s.Gyy {
		if n%p == o {
			s.Gyy[n] *= c * c
		}
	}
	for n := range s.GyyPairs {
		if pair := s.Pairs[n%pairs]; pair[0] == o || pair[1] == o {
			s.GyyPairs[n] *= complex(c, 0)
		}
	}
}

// TestOneForceEstimatorsAreInOrder: |H1| <= |Hv| <= |H2| with one phase, and coherence = H1/H2.
func TestOneForceEstimatorsAreInOrder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := square(t, 1, rapid.IntRange(2, 30).Draw(t, "n"))
		m.noise = rapid.Float64Range(0, 3).Draw(t, "noise")
		m.forceNoise = rapid.Float64Range(0, 3).Draw(t, "force noise")
		s := m.snapshot(newRand(t))
		h1, h2, hv := by(H1, s, nil, nil), by(H2, s, nil, nil), by(HV, s, nil, nil)
		for n, low := range h1.H {
			high, between := h2.H[n], hv.H[n]
			const rounding = 1 + 1e-13
			if cmplx.Abs(low) > cmplx.Abs(between)*rounding || cmplx.Abs(between) > cmplx.Abs(high)*rounding {
				t.Fatalf("|H1|, |Hv|, |H2| are %v, %v, %v", cmplx.Abs(low), cmplx.Abs(between), cmplx.Abs(high))
			}
			if ratio := low / high; cmplx.Abs(ratio-complex(h1.MultipleCoherence[n], 0)) > 1e-13 {
				t.Fatalf("H1/H2 = %v, want the coherence %v", ratio, h1.MultipleCoherence[n])
			}
			if math.Abs(cmplx.Phase(between/low)) > 1e-13 {
				t.Fatalf("Hv %v has another phase than H1 %v", between, low)
			}
		}
	})
}

func TestH2Unknown(t *testing.T) {
	for _, test := range []struct {
		name   string
		change func(*spectra.Snapshot)
		known  [4]bool
	}{
		{"as it is", func(*spectra.Snapshot) {}, [4]bool{true, true, true, true}},
		{"twin responses", func(s *spectra.Snapshot) {
			copy(s.Gyx[2:], s.Gyx[:2])
			s.Gyy[1], s.GyyPairs[0] = s.Gyy[0], complex(s.Gyy[0], 0)
		}, [4]bool{}},
		{"a silent response, whose H is 0", func(s *spectra.Snapshot) {
			s.Gyx[0], s.Gyx[1], s.Gyy[0], s.GyyPairs[0] = 0, 0, 0, 0
		}, [4]bool{true, true, false, false}},
		{"a silent force", func(s *spectra.Snapshot) {
			s.Gxx[1], s.Gxx[2], s.Gxx[3], s.Gyx[1], s.Gyx[3] = 0, 0, 0, 0, 0
		}, [4]bool{}},
		{"fewer blocks than forces", func(s *spectra.Snapshot) { s.Averages = 1 }, [4]bool{}},
		{"overflow", func(s *spectra.Snapshot) { s.Gyx[0] = cmplx.Inf() }, [4]bool{}},
		{"no number in one row", func(s *spectra.Snapshot) { s.GyyPairs[0] = cmplx.NaN() }, [4]bool{}},
	} {
		t.Run(test.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(1, 2))
			m := randomMade(rng, 1, 2, 2, 9)
			m.averaging.Pairs = allPairs(2)
			s := m.snapshot(rng)
			test.change(s)
			e := by(H2, s, nil, nil)
			for n, want := range test.known {
				if known := !cmplx.IsNaN(e.H[n]); known != want {
					t.Errorf("H[%d] is %v", n, e.H[n])
				}
			}
		})
	}
}

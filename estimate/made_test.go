package estimate

import (
	"math/cmplx"
	"math/rand/v2"

	"shakerwatch/spectra"
)

// A made test measurement: per line, n blocks of random forces mixed by mix, responses H x plus
// noise. Everything is drawn directly as transforms, so the truth is known line by line.
type made struct {
	shape  spectra.Shape
	blocks int
	h      []complex128 // (p,q) the truth, the same on every line
	mix    []complex128 // (q,q) forces are mix times unit white noise
	noise  float64      // standard deviation of the responses' noise

	forceNoise float64           // standard deviation of the noise that is measured with the forces
	averaging  spectra.Averaging // its Pairs are kept
}

func (m made) snapshot(rng *rand.Rand) *spectra.Snapshot {
	s := spectra.NewSnapshot(m.shape, m.averaging)
	s.SpacingHz = 1
	s.Averages, s.EffectiveAverages = m.blocks, float64(m.blocks)
	q, p := m.shape.Forces, m.shape.Responses
	x, y := make([]complex128, q), make([]complex128, p)
	for k := range m.shape.Lines {
		gxx, gyx, gyy := s.Gxx[k*q*q:][:q*q], s.Gyx[k*p*q:][:p*q], s.Gyy[k*p:][:p]
		for range m.blocks {
			draw(rng, x)
			mixed := make([]complex128, q)
			for i := range q {
				for j := range q {
					mixed[i] += m.mix[i*q+j] * x[j]
				}
			}
			draw(rng, y)
			for o := range p {
				y[o] *= complex(m.noise, 0)
				for i := range q {
					y[o] += m.h[o*q+i] * mixed[i]
				}
			}
			if m.forceNoise > 0 {
				draw(rng, x)
				for i := range mixed {
					mixed[i] += complex(m.forceNoise, 0) * x[i]
				}
			}
			for n, pair := range m.averaging.Pairs {
				s.GyyPairs[k*len(m.averaging.Pairs)+n] += y[pair[0]] * cmplx.Conj(y[pair[1]]) / complex(float64(m.blocks), 0)
			}
			for i := range q {
				for j := range q {
					gxx[i*q+j] += mixed[i] * cmplx.Conj(mixed[j]) / complex(float64(m.blocks), 0)
				}
			}
			for o := range p {
				for i := range q {
					gyx[o*q+i] += y[o] * cmplx.Conj(mixed[i]) / complex(float64(m.blocks), 0)
				}
				gyy[o] += abs2(y[o]) / float64(m.blocks)
			}
		}
	}
	return s
}

// draw fills x with complex normal values of variance 1.
func draw(rng *rand.Rand, x []complex128) {
	const half = 0.7071067811865476
	for i := range x {
		x[i] = complex(half*rng.NormFloat64(), half*rng.NormFloat64())
	}
}

// randomMade is a measurement with a random structure.
func randomMade(rng *rand.Rand, lines, q, p, blocks int) made {
	m := made{
		shape:  spectra.Shape{Lines: lines, Forces: q, Responses: p},
		blocks: blocks,
		h:      make([]complex128, p*q),
		mix:    make([]complex128, q*q),
		noise:  0.3,
	}
	draw(rng, m.h)
	draw(rng, m.mix)
	for i := range q {
		m.mix[i*q+i] += 1.5
	}
	return m
}

// noPoints are q forces without driving-point responses.
func noPoints(q int) []DrivingPoint {
	points := make([]DrivingPoint, q)
	for i := range points {
		points[i].Response = -1
	}
	return points
}

// allPairs are the pairs of p responses that H2 needs.
func allPairs(p int) [][2]int {
	var pairs [][2]int
	for n := range p {
		for o := range n {
			pairs = append(pairs, [2]int{o, n})
		}
	}
	return pairs
}

// by is the estimates of s by the given estimator, whitened unless the noise densities are nil.
func by(estimator string, s *spectra.Snapshot, noiseForce, noiseResponse []float64) *Estimates {
	e := New(s.Shape, Method{
		Points: noPoints(s.Forces), Estimator: estimator, Averaging: s.Averaging,
		NoiseForce: noiseForce, NoiseResponse: noiseResponse,
	})
	e.Update(s)
	return e
}

func estimatesOf(s *spectra.Snapshot, points []DrivingPoint) *Estimates {
	if points == nil {
		points = noPoints(s.Forces)
	}
	e := New(s.Shape, Method{Points: points})
	e.Update(s)
	return e
}

package watch

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// A drawn measurement is made line by line as transforms, so there is no leakage and the truth is known.
type drawn struct {
	rng        *rand.Rand
	rig        *rig.Rig
	q, p       int
	hz         []float64
	modes      []float64 // Hz
	width      []float64 // Hz
	shape      [][]float64
	forceShape []float64 // of point 0 as the force there sees it, where that differs
	noise      float64   // share of a response's own deviation
	shared     float64   // correlation of the noise of two responses is its square
	late       bool
	bend       func(k, channel int, v complex128) complex128 // what a channel makes of its value
	common     func(k int) float64                           // coherence of forces 0 and 1
}

const drawnSpacingHz = 2.5

func newDrawn(seed uint64, q, p, lines int) *drawn {
	s := newSimulated(seed, simOptions{q: q, p: p})
	d := &drawn{rng: rand.New(rand.NewPCG(seed, 2)), rig: s.rig, q: q, p: p, noise: 0.03, shape: s.shape}
	d.rig.Grid.Lines, d.rig.Grid.SpacingHz = lines, drawnSpacingHz
	for m, w := range s.omega {
		d.modes = append(d.modes, w*2560/2/math.Pi)
		d.width = append(d.width, 2*s.damping[m]*d.modes[m])
	}
	d.bend = func(_, _ int, v complex128) complex128 { return v }
	d.common = func(int) float64 { return 0 }
	return d
}

// h is the accelerance between two points.
func (d *drawn) h(hz float64, o, i int) (sum complex128) {
	force := d.shape[i]
	if i == 0 && d.forceShape != nil {
		force = d.forceShape
	}
	for m, f := range d.modes {
		sum += complex(-hz*hz*d.shape[o][m]*force[m], 0) / complex(f*f-hz*hz, hz*d.width[m])
	}
	return sum
}

// snapshot is an average of n blocks.
func (d *drawn) snapshot(n int) *spectra.Snapshot {
	averaging := estimate.AveragingOf(d.rig)
	averaging.Halves = false
	s := spectra.NewSnapshot(estimate.ShapeOf(d.rig), averaging)
	s.SpacingHz, s.Averages, s.EffectiveAverages = drawnSpacingHz, n, float64(n)
	x, y := make([]complex128, d.q), make([]complex128, d.p)
	for k := range s.Lines {
		hz := float64(k) * drawnSpacingHz
		h := make([]complex128, d.p*d.q)
		deviation := make([]float64, d.p)
		for o := range d.p {
			for i := range d.q {
				h[o*d.q+i] = d.h(hz, o, i)
				deviation[o] += abs2(h[o*d.q+i])
			}
			deviation[o] = math.Sqrt(deviation[o]) * d.noise
		}
		mix := math.Sqrt(d.common(k))
		for range n {
			for i := range x {
				x[i] = d.draw()
			}
			if d.q > 1 {
				x[1] = complex(mix, 0)*x[0] + complex(math.Sqrt(1-mix*mix), 0)*x[1]
			}
			first := d.draw()
			for o := range y {
				noise := complex(math.Sqrt(1-d.shared*d.shared), 0)*d.draw() + complex(d.shared, 0)*first
				y[o] = complex(deviation[o], 0) * noise
				for i := range x {
					y[o] += h[o*d.q+i] * x[i]
				}
				if d.rig.Responses[o].Sign() < 0 {
					y[o] = -y[o]
				}
				y[o] = d.bend(k, d.q+o, y[o])
			}
			d.add(s, k, x, y, n)
		}
	}
	return s
}

func (d *drawn) add(s *spectra.Snapshot, k int, x, y []complex128, n int) {
	w := complex(1/float64(n), 0)
	seen := make([]complex128, len(x))
	for i, v := range x {
		seen[i] = d.bend(k, i, v)
	}
	for i, a := range seen {
		for j, b := range seen {
			s.Gxx[(k*d.q+i)*d.q+j] += w * a * cmplx.Conj(b)
		}
	}
	for o, a := range y {
		for i, b := range seen {
			s.Gyx[(k*d.p+o)*d.q+i] += w * a * cmplx.Conj(b)
		}
		s.Gyy[k*d.p+o] += abs2(a) / float64(n)
	}
	for m, pair := range s.Averaging.Pairs {
		s.GyyPairs[k*len(s.Averaging.Pairs)+m] += w * y[pair[0]] * cmplx.Conj(y[pair[1]])
	}
}

func (d *drawn) draw() complex128 {
	return complex(d.rng.NormFloat64()*math.Sqrt2/2, d.rng.NormFloat64()*math.Sqrt2/2)
}

// look is what a looker finds in averages of several sizes, the last one's findings.
func (d *drawn) look(sizes ...int) (found []finding) {
	l := newLayout(d.rig)
	m, k := newModel(l), newLooker(d.rig, l, nil)
	for _, n := range sizes {
		s := d.snapshot(n)
		m.learn(s)
		if !m.known {
			panic(fmt.Sprintf("watch: an average of %d blocks says nothing", n))
		}
		found = k.look(nil, m, s)
	}
	return found
}

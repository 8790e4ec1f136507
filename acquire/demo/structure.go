package demo

import "math"

// A structure is linear and described by its modes: the acceleration at degree of freedom o for a
// force at i is the sum over the modes of -w² phi_o phi_i / (w_r² - w² + 2j zeta_r w_r w), so
// reciprocity and positive driving-point power hold by construction (Ewins, Modal Testing, 2nd ed.,
// 2000, from memory).
type structure struct {
	points []string // names
	modes  []mode
	topHz  float64 // above which there are no modes
}

// A mode is normalised to unit modal mass.
type mode struct {
	rateRad float64      // undamped natural frequency, rad/s
	damping float64      // viscous, as a fraction of critical
	shape   [][3]float64 // kg^-1/2, along x, y and z, a row for each point
}

// A dof is a degree of freedom: a point of the structure and an axis, 0 to 2 for x to z.
type dof struct{ point, axis int }

// find returns the degree of freedom of a point's name and an axis letter, and whether it exists.
func (s *structure) find(point, letter string) (at dof, ok bool) {
	for i, name := range s.points {
		if name == point {
			switch letter {
			case "x", "y", "z":
				return dof{i, int(letter[0] - 'x')}, true
			}
		}
	}
	return dof{}, false
}

// at is the mode's shape at a degree of freedom, kg^-1/2.
func (m *mode) at(d dof) float64 { return m.shape[d.point][d.axis] }

// accelerance is the acceleration along o for a unit force along i, m/s² per N, for e^{+jwt}.
func (s *structure) accelerance(freqHz float64, o, i dof) complex128 {
	w := 2 * math.Pi * freqHz
	var sum complex128
	for r := range s.modes {
		m := &s.modes[r]
		stiff := complex(m.rateRad*m.rateRad-w*w, 2*m.damping*m.rateRad*w)
		sum += complex(-w*w*m.at(o)*m.at(i), 0) / stiff
	}
	return sum
}

package watch

import (
	"math"

	"shakerwatch/spectra"
	"shakerwatch/spectra/kernel"
)

// A model is what the average says the next block will be like. H and S are kept in single precision: with
// 24 bits of H the prediction is right to -140 dB, below the noise of any converter.
//
// Line k of the grid is line k - cells.first here.
type model struct {
	layout *layout

	ne, v float64 // n_e and n_e - q
	known bool    // Gxx has an inverse on most lines

	h       *kernel.Matrices // (place of the line, o, i) H1
	weight  []float32        // (line, row) what |r|² is multiplied by to give t/v; 0 where unknown
	factors []complex128     // (line, i, j) of Gxx
	regular []bool           // (line) Gxx has an inverse
	gxx     []float64        // (line, i) power density of each force

	previous []float64 // (line, i) scratch: gxx before this one
	row      []complex128
}

// minResidual is the least residual density that is believed, as a share of the response's own: below
// -110 dB there is rounding, of the converter or of H above.
const minResidual = 1e-11

// minRegular is the share of lines that must be known for a model to be of use.
const minRegular = 0.5

func newModel(l *layout) *model {
	n := l.cells.lines()
	return &model{
		layout:   l,
		h:        kernel.NewMatrices(l.cells.stride*l.cells.every(), l.p, l.q),
		weight:   make([]float32, n*l.rows),
		factors:  make([]complex128, n*l.q*l.q),
		regular:  make([]bool, n),
		gxx:      make([]float64, n*l.q),
		previous: make([]float64, n*l.q),
		row:      make([]complex128, l.q),
	}
}

// learn takes the average. It keeps no hold of s.
func (m *model) learn(s *spectra.Snapshot) {
	q := m.layout.q
	m.ne, m.v = s.EffectiveAverages, s.EffectiveAverages-float64(q)
	copy(m.previous, m.gxx)
	regular := 0
	for n := range m.regular {
		k := m.layout.cells.first + n
		gxx := s.Gxx[k*q*q : (k+1)*q*q]
		for i := range q {
			m.gxx[n*q+i] = real(gxx[i*q+i])
		}
		factor := m.factor(n)
		m.regular[n] = m.v > 0 && factor.factor(gxx)
		if m.regular[n] {
			regular++
		}
		m.learnLine(s, n, factor)
	}
	m.known = float64(regular) >= minRegular*float64(len(m.regular)) && regular > 0
}

func (m *model) factor(n int) lower {
	q := m.layout.q
	return lower{q, m.factors[n*q*q : (n+1)*q*q]}
}

// learnLine takes the responses of a line: H = Gyx Gxx^-1, and S = n_e/(n_e - q) Gyy (1 - g2).
func (m *model) learnLine(s *spectra.Snapshot, n int, factor lower) {
	q, p, k := m.layout.q, m.layout.p, m.layout.cells.first+n
	for o := range p {
		weight := &m.weight[n*m.layout.rows+o]
		gyy := s.Gyy[k*p+o]
		if !m.regular[n] || !(gyy > 0) {
			*weight = 0
			for i := range q {
				m.h.Set(m.place(n), o, i, 0)
			}
			continue
		}
		copy(m.row, s.Gyx[(k*p+o)*q:(k*p+o+1)*q])
		explained := factor.row(m.row)
		for i, v := range m.row {
			m.h.Set(m.place(n), o, i, complex64(v))
		}
		residual := max(gyy-explained, minResidual*gyy) * m.ne / m.v
		*weight = float32(min(m.layout.density/(residual*m.v), math.MaxFloat32))
	}
}

// place is where line n stands in h. Lines that are judged stand one behind the other, since memory is read fastest
// without gaps.
func (m *model) place(n int) int {
	c := m.layout.cells
	return n%c.stride*c.every() + n/c.stride
}

// at is H_oi at line n of the model.
func (m *model) at(n, o, i int) complex128 {
	return complex128(m.h.At(m.place(n), o, i))
}

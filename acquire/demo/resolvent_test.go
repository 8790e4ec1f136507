package demo

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// solveShifted returns X of (zI - m) X = b, rows of X first. gonum solves real systems only, so the
// real and imaginary parts are stacked.
func solveShifted(t testing.TB, m *mat.Dense, z complex128, b [][]complex128) [][]complex128 {
	t.Helper()
	n, _ := m.Dims()
	cols := len(b[0])
	system, right := mat.NewDense(2*n, 2*n, nil), mat.NewDense(2*n, cols, nil)
	for i := range n {
		for j := range n {
			system.Set(i, j, -m.At(i, j))
			system.Set(n+i, n+j, -m.At(i, j))
		}
		system.Set(i, i, system.At(i, i)+real(z))
		system.Set(n+i, n+i, system.At(n+i, n+i)+real(z))
		system.Set(i, n+i, -imag(z))
		system.Set(n+i, i, imag(z))
		for j := range cols {
			right.Set(i, j, real(b[i][j]))
			right.Set(n+i, j, imag(b[i][j]))
		}
	}
	var x mat.Dense
	if err := x.Solve(system, right); err != nil {
		t.Fatalf("solve at %v: %v", z, err)
	}
	dst := zeros(n, cols)
	for i := range n {
		for j := range cols {
			dst[i][j] = complex(x.At(i, j), x.At(n+i, j))
		}
	}
	return dst
}

func zeros(rows, cols int) [][]complex128 {
	m := make([][]complex128, rows)
	for i := range m {
		m[i] = make([]complex128, cols)
	}
	return m
}

// times returns the real matrix m times x.
func times(m mat.Matrix, x [][]complex128) [][]complex128 {
	rows, inner := m.Dims()
	dst := zeros(rows, len(x[0]))
	for i := range rows {
		for j := range dst[i] {
			for k := range inner {
				dst[i][j] += complex(m.At(i, k), 0) * x[k][j]
			}
		}
	}
	return dst
}

// continuous is the transfer from inputs to outputs at a frequency, c (jw - a)^-1 b + d.
func continuous(t testing.TB, s stateSpace, freqHz float64) [][]complex128 {
	n, q := s.b.Dims()
	b := zeros(n, q)
	for i := range n {
		for j := range q {
			b[i][j] = complex(s.b.At(i, j), 0)
		}
	}
	dst := times(s.c, solveShifted(t, s.a, complex(0, 2*math.Pi*freqHz), b))
	for i := range dst {
		for j := range q {
			dst[i][j] += complex(s.d.At(i, j), 0)
		}
	}
	return dst
}

// discrete is the transfer of s from inputs whose sub samples are e^{jwt} to the outputs of frames.
func discrete(t testing.TB, s *stepper, stepS, freqHz float64) [][]complex128 {
	advance := mat.NewDense(s.states, s.advance.Cols, s.advance.Data)
	observe := mat.NewDense(s.observe.Rows, s.observe.Cols, s.observe.Data)
	phase := 2 * math.Pi * freqHz * stepS
	inputs := zeros(s.states, s.inputs)
	for i := range inputs {
		for j := range inputs[i] {
			for k := range s.sub + 1 {
				weight := advance.At(i, s.states+j*(s.sub+1)+k)
				inputs[i][j] += complex(weight, 0) * cmplx.Exp(complex(0, phase*float64(k)))
			}
		}
	}
	frame := cmplx.Exp(complex(0, phase*float64(s.sub)))
	phi := mat.DenseCopyOf(advance.Slice(0, s.states, 0, s.states))
	x := solveShifted(t, phi, frame, inputs)
	for range s.inputs {
		x = append(x, make([]complex128, s.inputs))
	}
	for i := range s.inputs {
		x[s.states+i][i] = 1
	}
	return times(observe, x)
}

// ratio returns y f^-1 for two forces: the frequency responses, of which y and f are the responses
// and forces to each drive.
func ratio(f, y [][]complex128) [][]complex128 {
	det := f[0][0]*f[1][1] - f[0][1]*f[1][0]
	dst := zeros(len(y), 2)
	for o := range y {
		dst[o][0] = (y[o][0]*f[1][1] - y[o][1]*f[1][0]) / det
		dst[o][1] = (y[o][1]*f[0][0] - y[o][0]*f[0][1]) / det
	}
	return dst
}

// forcesByHand is the transfer from currents to forces written out for two shakers: with K the
// stinger, Z the armature with its flexure and R the receptance between the driving points,
//
//	(I + K Z / (Z + K) R) f = K / (Z + K) F.
func forcesByHand(s *structure, shakers []attached, freqHz float64) [][]complex128 {
	w := 2 * math.Pi * freqHz
	m, right := zeros(2, 2), zeros(2, 2)
	for i, sh := range shakers {
		k := complex(sh.stingerNPerM, w*sh.stingerNSPerM)
		z := complex(sh.flexureNPerM-w*w*sh.armatureKg, w*sh.flexureNSPerM)
		for j, other := range shakers {
			m[i][j] = k * z / (z + k) * s.accelerance(freqHz, sh.at, other.at) / complex(-w*w, 0)
		}
		m[i][i]++
		right[i][i] = k / (z + k) * complex(sh.forceNPerA, 0)
	}
	det := m[0][0]*m[1][1] - m[0][1]*m[1][0]
	dst := zeros(2, 2)
	for j := range 2 {
		dst[0][j] = (m[1][1]*right[0][j] - m[0][1]*right[1][j]) / det
		dst[1][j] = (m[0][0]*right[1][j] - m[1][0]*right[0][j]) / det
	}
	return dst
}

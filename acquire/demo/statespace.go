package demo

import "gonum.org/v1/gonum/mat"

// A stateSpace is the linear system dx/dt = a x + b u, y = c x + d u, in s.
type stateSpace struct{ a, b, c, d *mat.Dense }

// triangleHold returns the matrices of the exact step over stepS for an input that runs straight
// from one sample to the next:
//
//	x[n+1] = phi x[n] + old u[n] + fresh u[n+1]
//
// They are read from the exponential of the system augmented by its input and the input's slope
// (triangle hold: Franklin, Powell, Workman, Digital Control of Dynamic Systems, 3rd ed., 1998, from
// memory; the extended matrix: Van Loan, doi:10.1109/TAC.1978.1101743).
func (s *stateSpace) triangleHold(stepS float64) (phi, old, fresh *mat.Dense) {
	n, q := s.b.Dims()
	var aug, exp mat.Dense
	aug.ReuseAs(n+2*q, n+2*q)
	aug.Slice(0, n, 0, n).(*mat.Dense).Scale(stepS, s.a)
	aug.Slice(0, n, n, n+q).(*mat.Dense).Scale(stepS, s.b)
	for i := range q {
		aug.Set(n+i, n+q+i, 1)
	}
	exp.Exp(&aug)
	phi = mat.DenseCopyOf(exp.Slice(0, n, 0, n))
	old = mat.DenseCopyOf(exp.Slice(0, n, n, n+q))
	fresh = mat.DenseCopyOf(exp.Slice(0, n, n+q, n+2*q))
	old.Sub(old, fresh)
	return phi, old, fresh
}

package demo

import (
	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/mat"
)

// A stepper advances a state space from one frame to the next, exactly for inputs that run straight
// between sub samples a frame. It starts at rest.
//
// The sub steps of a frame are folded into one matrix, so a frame costs one product with the states
// and inputs however many sub steps it has.
type stepper struct {
	states, inputs, sub int

	advance blas64.General // states × (states + inputs (sub+1))
	observe blas64.General // outputs × (states + inputs)

	from []float64 // the states, then for each input its last sample and the frame's sub new ones
	to   []float64 // the states after the frame, then each input's newest sample
}

// newStepper returns a stepper with sub steps of stepS a frame.
func newStepper(sys stateSpace, stepS float64, sub int) *stepper {
	n, q := sys.b.Dims()
	outputs, _ := sys.c.Dims()
	phi, old, fresh := sys.triangleHold(stepS)

	advance := mat.NewDense(n, n+q*(sub+1), nil)
	// after is what the rest of the frame makes of the states at the end of sub step k
	after := mat.NewDense(n, n, nil)
	for i := range n {
		after.Set(i, i, 1)
	}
	var product mat.Dense
	for k := sub - 1; k >= 0; k-- {
		product.Mul(after, old)
		addInputs(advance, &product, n+k, sub+1)
		product.Reset()
		product.Mul(after, fresh)
		addInputs(advance, &product, n+k+1, sub+1)
		product.Reset()
		product.Mul(after, phi)
		after.Copy(&product)
		product.Reset()
	}
	advance.Slice(0, n, 0, n).(*mat.Dense).Copy(after)
	observe := mat.NewDense(outputs, n+q, nil)
	observe.Augment(sys.c, sys.d)

	return &stepper{
		states: n, inputs: q, sub: sub,
		advance: advance.RawMatrix(), observe: observe.RawMatrix(),
		from: make([]float64, n+q*(sub+1)), to: make([]float64, n+q),
	}
}

// addInputs adds the columns of m to every stride-th column of dst from first on.
func addInputs(dst, m *mat.Dense, first, stride int) {
	n, q := m.Dims()
	for i := range q {
		for r := range n {
			column := first + i*stride
			dst.Set(r, column, dst.At(r, column)+m.At(r, i))
		}
	}
}

// input is the place for the next frame's sub samples of input i. It is valid until step.
func (s *stepper) input(i int) []float64 {
	first := s.states + i*(s.sub+1)
	return s.from[first+1 : first+1+s.sub]
}

// step advances by a frame and puts the outputs at its end into dst.
func (s *stepper) step(dst []float64) {
	multiply(s.to[:s.states], s.advance, s.from)
	copy(s.from, s.to[:s.states])
	for i := range s.inputs {
		first := s.states + i*(s.sub+1)
		s.from[first] = s.from[first+s.sub]
		s.to[s.states+i] = s.from[first]
	}
	multiply(dst, s.observe, s.to)
}

// multiply puts m x into dst.
func multiply(dst []float64, m blas64.General, x []float64) {
	blas64.Gemv(blas.NoTrans, 1, m, blas64.Vector{N: len(x), Data: x, Inc: 1},
		0, blas64.Vector{N: len(dst), Data: dst, Inc: 1})
}

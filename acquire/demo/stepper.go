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
	late    []lateOutput

	from []float64 // the states, then for each input its last sample and the frame's sub new ones
	to   []float64 // the states after the frame, then each input's newest sample
}

// A lateOutput is one that is taken some sub steps before a frame's end, so that it seems late.
type lateOutput struct {
	output  int
	weights []float64 // of what a stepper's from holds before the frame
	value   float64
}

// newStepper returns a stepper with sub steps of stepS a frame. An output is taken early sub steps, 0 to sub-1,
// before the end of the frame; without early, none is.
func newStepper(sys stateSpace, stepS float64, sub int, early ...int) *stepper {
	n, q := sys.b.Dims()
	outputs, _ := sys.c.Dims()
	f := newFolder(sys, stepS, sub)
	observe := mat.NewDense(outputs, n+q, nil)
	observe.Augment(sys.c, sys.d)
	s := &stepper{
		states: n, inputs: q, sub: sub,
		advance: f.fold(sub).RawMatrix(), observe: observe.RawMatrix(),
		from: make([]float64, n+q*(sub+1)), to: make([]float64, n+q),
	}
	for o, steps := range early {
		if steps > 0 {
			s.late = append(s.late, lateOutput{output: o, weights: f.outputAt(sys, o, sub-steps)})
		}
	}
	return s
}

// input is the place for the next frame's sub samples of input i. It is valid until step.
func (s *stepper) input(i int) []float64 {
	first := s.states + i*(s.sub+1)
	return s.from[first+1 : first+1+s.sub]
}

// step advances by a frame and puts the outputs at its end into dst.
func (s *stepper) step(dst []float64) {
	for i := range s.late {
		s.late[i].value = blas64.Dot(vector(s.late[i].weights), vector(s.from))
	}
	s.move()
	s.outputs(dst)
	for i := range s.late {
		dst[s.late[i].output] = s.late[i].value
	}
}

// move advances the states by a frame.
func (s *stepper) move() {
	multiply(s.to[:s.states], s.advance, s.from)
	copy(s.from, s.to[:s.states])
	for i := range s.inputs {
		first := s.states + i*(s.sub+1)
		s.from[first] = s.from[first+s.sub]
		s.to[s.states+i] = s.from[first]
	}
}

// outputs puts the outputs for the present states and inputs into dst.
func (s *stepper) outputs(dst []float64) { multiply(dst, s.observe, s.to) }

func (s *stepper) state() []float64 { return s.from[:s.states] }

func (s *stepper) held(i int) *float64 { return &s.from[s.states+i*(s.sub+1)] }

// multiply puts m x into dst.
func multiply(dst []float64, m blas64.General, x []float64) {
	blas64.Gemv(blas.NoTrans, 1, m, vector(x), 0, vector(dst))
}

func vector(x []float64) blas64.Vector { return blas64.Vector{N: len(x), Data: x, Inc: 1} }

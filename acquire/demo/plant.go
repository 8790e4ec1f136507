package demo

// A plant is a structure with its shakers in motion.
type plant interface {
	// input is the place for the next frame's sub samples of input i. It is valid until step.
	input(i int) []float64

	// step advances by a frame and puts the outputs at its end into dst.
	step(dst []float64)

	// state is where the physical states lie: see couple. They may be written.
	state() []float64

	// held is where the last sample of input i lies, from which the next frame goes on. It may be
	// written.
	held(i int) *float64
}

// takeOver lets a plant go on from where another with the same states and currents is.
func takeOver(p, from plant, currents int) {
	copy(p.state(), from.state())
	for i := range currents {
		*p.held(i) = *from.held(i)
	}
	if sprung, ok := p.(*springStepper); ok {
		sprung.start()
	}
}

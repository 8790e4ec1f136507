package estimate

import (
	"math"
	"math/rand/v2"

	"shakerwatch/spectra"
)

// A modal test rig: modes driven by white random forces, sampled in time and averaged by package
// spectra, so that leakage, overlap and the likeness of neighbouring lines are those of a measurement.
type modal struct {
	spectra.Shape
	spectra.Averaging
	window  spectra.Window
	block   int
	overlap float64
	modes   []madeMode
	direct  float64 // response to every force at once, all frequencies
	noise   float64 // standard deviation of the responses' noise; the forces' is 1
	hum     float64 // amplitude of a steady tone in the responses, humLine lines up
}

// humLine is where the hum is, in lines.
const humLine = 40.3

// madeMode is a mode: centre and half-power bandwidth in lines. Its |H| at the peak is the
// product of its two shapes.
type madeMode struct {
	line, bandwidth   float64
	atForce, atSensor []float64 // (q), (p)
}

// A modalRun is a modal rig while it runs.
type modalRun struct {
	modal
	rng     *rand.Rand
	average *spectra.Average
	one     *spectra.Transform
	cutter  *spectra.Cutter
	state   [][2]float64
	time    int
	frame   []float64
	samples []float64
	lines   []complex128
}

func (m modal) start(seed uint64) *modalRun {
	hop := max(1, int(math.Round(float64(m.block)*(1-m.overlap))))
	window := m.window.Values(m.block)
	r := &modalRun{
		modal: m, rng: rand.New(rand.NewPCG(seed, 99)),
		average: spectra.NewAverage(m.Shape, window, hop, 1, float64(m.block), m.Averaging),
		one:     spectra.NewTransform(window),
		cutter:  spectra.NewCutter(m.Channels(), m.block, hop),
		state:   make([][2]float64, len(m.modes)),
		frame:   make([]float64, m.Channels()),
		samples: make([]float64, m.Channels()*m.block),
		lines:   make([]complex128, m.Lines*m.Channels()),
	}
	for range 2 * m.block { // the modes settle
		r.step()
	}
	return r
}

// step makes the next frame. A mode is a resonator with impulse response r^n sin(nθ), whose frequency
// response near its centre is -i/(1 + 2ix/B) after scaling by twice its decay.
func (r *modalRun) step() {
	q := r.Forces
	var sum float64
	for i := range q {
		r.frame[i] = r.rng.NormFloat64()
		sum += r.frame[i]
	}
	r.time++
	tone := math.Cos(2 * math.Pi * humLine * float64(r.time) / float64(r.block))
	for o := range r.Responses {
		r.frame[q+o] = r.noise*r.rng.NormFloat64() + r.direct*sum + r.hum*tone
	}
	for n, mode := range r.modes {
		decay := math.Pi * mode.bandwidth / float64(r.block)
		radius, angle := math.Exp(-decay), 2*math.Pi*mode.line/float64(r.block)
		var drive float64
		for i, a := range mode.atForce {
			drive += a * r.frame[i]
		}
		s := &r.state[n]
		v := 2*radius*math.Cos(angle)*s[0] - radius*radius*s[1] + 2*decay*math.Sin(angle)*drive
		s[0], s[1] = v, s[0]
		for o, a := range mode.atSensor {
			r.frame[q+o] += a * v
		}
	}
}

// run goes on until the given number of blocks is averaged.
func (r *modalRun) run(blocks int) {
	for r.average.Len() < blocks {
		r.step()
		r.cutter.Put(r.frame, false)
		if !r.cutter.Full() {
			continue
		}
		r.cutter.CopyTo(r.samples)
		for ch := range r.Channels() {
			r.one.ChannelTo(r.lines, ch, r.Channels(), r.samples[ch*r.block:(ch+1)*r.block])
		}
		r.average.Sum([][]complex128{r.lines}, 0, r.Lines)
		r.average.Count(r.cutter.Start())
		r.cutter.Advance()
	}
}

func (r *modalRun) snapshot() *spectra.Snapshot {
	s := spectra.NewSnapshot(r.Shape, r.Averaging)
	r.average.SnapshotTo(s)
	return s
}

// target is one for the rig, over all lines that can be judged.
func (m modal) target() Target {
	return Target{
		RandomError: 0.05, Share: 0.9, DepthDB: 20, First: m.window.Smear() + 1, Last: m.Lines - 1,
		Lines: NewLineCorrelation(m.window),
	}
}

package demo

import (
	"fmt"
	"hash/fnv"
	"math"
	"math/rand/v2"
	"sync/atomic"

	"gonum.org/v1/gonum/floats"

	"shakerwatch/acquire/rig"
)

// A Source delivers the frames of a rig on the simulated structure, without end and as fast as they
// are read. It never returns an error. It serves one goroutine at a time, but for SetDrive.
//
// Equal rigs and seeds give equal bits on one processor architecture, however the frames are read.
type Source struct {
	rateHz   float64
	channels int
	plant    *stepper
	drives   []drive
	sensors  []sensor      // of the plant's outputs
	outputs  []float64     // N and m/s² along positive axes, one frame
	level    atomic.Uint64 // bits of the share of the drives that reaches the shakers
}

const (
	// passRatio and stopRatio bound the edge of the drives, per max_frequency. The stop lies at half
	// the lowest rate that a rig may have, so nothing aliases.
	passRatio = 1.0
	stopRatio = 1.28

	// fineRatio is how many sub samples a period of the highest frequency has at least, and
	// structureTopHz the highest frequency at which the structure has modes. The current between two
	// sub samples is a straight line, which puts weak images of the band around the rate of the sub
	// samples. At 72 what they leave is below 1e-4 of H even in antiresonances 100 dB deep; a test measures it.
	fineRatio      = 72
	structureTopHz = 1000

	// runInS is how long the shakers have been running when the first frame is read: over seven time
	// constants of the slowest flexible mode.
	runInS = 1.0
)

// New returns a source for r, which is of kind demo with random excitation, with the noise of the
// drives and sensors drawn from seed. A shaker stands at each force, all alike, driven
// independently. Channels of the stream that r does not use are 0.
//
// The error is a rig.Mistakes where channels do not fit the structure.
func New(r *rig.Rig, seed uint64) (*Source, error) {
	if r.Source.Kind != "demo" {
		return nil, fmt.Errorf("%s: source kind %q is not simulated: choose demo", r.Path, r.Source.Kind)
	}
	if r.Analysis.Excitation != "random" {
		return nil, fmt.Errorf("%s: excitation %q is not simulated: choose random", r.Path, r.Analysis.Excitation)
	}
	l, err := newLayout(r, newSkid())
	if err != nil {
		return nil, err
	}
	s := newSource(r, l, seed)
	frame := make([]float64, s.channels)
	for range int(runInS * s.rateHz) {
		s.frame(frame)
	}
	return s, nil
}

func newSource(r *rig.Rig, l layout, seed uint64) *Source {
	rateHz, topHz := r.Source.RateHz, r.Analysis.MaxFrequencyHz
	sub := subSamples(rateHz, topHz)
	s := &Source{
		rateHz:   rateHz,
		channels: r.Source.Channels,
		plant:    newStepper(couple(l.structure, l.shakers, l.sensors), 1/(rateHz*float64(sub)), sub),
		outputs:  make([]float64, len(r.Forces)+len(r.Responses)),
	}
	s.SetDrive(1)
	for i, c := range r.Forces {
		b := driveBand(rateHz, topHz, l.shakers[i].currentRMSA)
		s.drives = append(s.drives, newNoiseDrive(b, stream(seed, "drive "+c.Name)))
		s.sensors = append(s.sensors, newSensor(c, rateHz, forceFloor, seed))
	}
	for _, c := range r.Responses {
		s.sensors = append(s.sensors, newSensor(c, rateHz, responseFloor, seed))
	}
	return s
}

// subSamples is the number of steps from one frame to the next.
func subSamples(rateHz, topHz float64) int {
	return int(math.Ceil(fineRatio * max(topHz, structureTopHz) / rateHz))
}

// driveBand is the band of drives for frames at rateHz and max_frequency topHz. The white samples lie
// as many whole frames apart as the stop allows, so the cost does not grow with the rate.
func driveBand(rateHz, topHz, rms float64) band {
	sub := subSamples(rateHz, topHz)
	stopHz := stopRatio * topHz
	// 1e-9: a rate of exactly twice the stop may compute to a little less
	frames := max(1, int(rateHz/(2*stopHz)+1e-9))
	return band{rateHz: rateHz * float64(sub), every: sub * frames, passHz: passRatio * topHz, stopHz: stopHz, rms: rms}
}

// stream returns random numbers that depend on the seed and the label only, so that a channel's
// noise does not depend on its place in the rig file.
func stream(seed uint64, label string) *rand.Rand {
	h := fnv.New64a()
	h.Write([]byte(label))
	return rand.New(rand.NewPCG(seed, h.Sum64()))
}

// SetDrive turns all drives to a share of their full level, 0 to 1, from the next frame on. It may
// be called while another goroutine reads.
func (s *Source) SetDrive(level float64) { s.level.Store(math.Float64bits(level)) }

// RateHz is the number of frames per second.
func (s *Source) RateHz() float64 { return s.rateHz }

// Channels is the number of samples in a frame.
func (s *Source) Channels() int { return s.channels }

// Read fills the whole of dst and never ends.
func (s *Source) Read(dst []float64) (n int, err error) {
	n = len(dst) / s.channels
	for i := range n {
		s.frame(dst[i*s.channels : (i+1)*s.channels])
	}
	return n, nil
}

// frame puts the next frame into dst.
func (s *Source) frame(dst []float64) {
	level := math.Float64frombits(s.level.Load())
	for i, d := range s.drives {
		currents := s.plant.input(i)
		d.next(currents)
		if level != 1 {
			floats.Scale(level, currents)
		}
	}
	s.plant.step(s.outputs)
	clear(dst)
	for i := range s.sensors {
		dst[s.sensors[i].channel] = s.sensors[i].digital(s.outputs[i])
	}
}

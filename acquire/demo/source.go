package demo

import (
	"fmt"
	"hash/fnv"
	"math"
	"math/rand/v2"
	"sync"
	"sync/atomic"

	"gonum.org/v1/gonum/floats"

	"shakerwatch/acquire"
	"shakerwatch/acquire/rig"
)

// A Source delivers the frames of a rig on the simulated structure, without end and as fast as they
// are read. It returns no error but an *acquire.GapError, and that only where a fault loses frames. It serves one
// goroutine at a time, but for SetDrive, SetFaults, SetSpring and Frames.
//
// Equal rigs, seeds and faults give equal bits on one processor architecture, however the frames are read.
type Source struct {
	rateHz   float64
	topHz    float64
	channels int
	names    []string // of the outputs
	seed     uint64
	layout   layout
	sub      int // steps of the plant a frame
	drives   []drive
	sensors  []sensor      // of the outputs
	outputs  []float64     // N and m/s² along positive axes, one frame
	level    atomic.Uint64 // bits of the share of the drives that reaches the shakers

	mu     sync.Mutex // guards what follows; Read holds it
	now    int64      // the next frame; 0 is the first that is read
	sound  plant      // with nothing broken
	spring *fitted
	faults []*broken
	turns  []turn // still to come
	set    *setting
	past   history
}

// fineRatio is how many sub samples a period of the highest frequency has at least, be it one of
// the band or of a mode. The current between two sub samples is a straight line, which puts weak
// images of the band around the rate of the sub samples. At 72 what they leave is below 1e-4 of H
// even in antiresonances 100 dB deep; a test measures it.
const fineRatio = 72

// New returns a source for r, which is of kind demo, with the noise of the drives and sensors drawn
// from seed. A shaker stands at each force, all alike, driven independently with the excitation of r.
// Channels of the stream that r does not use are 0.
//
// The first frame comes from shakers that have been running. With burst excitation it is the first
// of a burst where r gives a period, and in the silence before one where it gives a trigger. With
// periodic excitation it is the first of a period, two periods before the first change.
//
// The error is a rig.Mistakes where channels do not fit the structure.
func New(r *rig.Rig, seed uint64) (*Source, error) {
	if r.Source.Kind != "demo" {
		return nil, fmt.Errorf("%s: source kind %q is not simulated: choose demo", r.Path, r.Source.Kind)
	}
	l, err := newLayout(r, newSkid())
	if err != nil {
		return nil, err
	}
	return start(r, l, seed)
}

// start returns the source of a layout of r, run in.
func start(r *rig.Rig, l layout, seed uint64) (*Source, error) {
	s, runIn, err := newSource(r, l, seed)
	if err != nil {
		return nil, err
	}
	frame := make([]float64, s.channels)
	for range runIn {
		s.frame(frame)
	}
	s.now = 0
	return s, nil
}

// newSource returns a source at rest, and after how many frames it has run in.
func newSource(r *rig.Rig, l layout, seed uint64) (s *Source, runIn int, err error) {
	rateHz := r.Source.RateHz
	sub := subSamples(rateHz, max(r.Analysis.MaxFrequencyHz, l.structure.topHz))
	s = &Source{
		rateHz:   rateHz,
		topHz:    r.Analysis.MaxFrequencyHz,
		channels: r.Source.Channels,
		names:    channelNames(r),
		seed:     seed,
		layout:   l,
		sub:      sub,
		outputs:  make([]float64, len(r.Forces)+len(r.Responses)),
	}
	s.past = newHistory(len(s.outputs))
	s.sound = new(condition).build(l, rateHz, sub)
	s.set = &setting{plant: s.sound}
	s.SetDrive(1)
	if s.drives, runIn, err = newDrives(r, l.shakers, sub, seed); err != nil {
		return nil, 0, err
	}
	for i, c := range r.Channels() {
		s.sensors = append(s.sensors, newSensor(c, rateHz, l.floors[i], seed))
	}
	return s, runIn, nil
}

// subSamples is the number of steps from one frame to the next for frequencies up to topHz.
func subSamples(rateHz, topHz float64) int { return int(math.Ceil(fineRatio * topHz / rateHz)) }

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

// Read fills the whole of dst and never ends. Where a fault loses frames it returns an *acquire.GapError.
func (s *Source) Read(dst []float64) (n int, err error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	n = len(dst) / s.channels
	for i := range n {
		frame := dst[i*s.channels : (i+1)*s.channels]
		if s.turn(); s.set.lost {
			if i > 0 {
				return i, nil
			}
			return 0, &acquire.GapError{Frames: s.lose(frame)}
		}
		s.frame(frame)
	}
	return n, nil
}

// lose runs through the frames that are lost here and returns how many. It overwrites scratch, a frame.
func (s *Source) lose(scratch []float64) (frames int64) {
	for s.set.lost {
		s.frame(scratch)
		frames++
		s.turn()
	}
	return frames
}

// frame puts the next frame into dst.
func (s *Source) frame(dst []float64) {
	s.drive()
	s.set.plant.step(s.outputs)
	s.past.add(s.outputs)
	clear(dst)
	for i := range s.sensors {
		sensor := &s.sensors[i]
		if s.set.chains == nil {
			dst[sensor.channel] = sensor.digital(s.outputs[i])
			continue
		}
		c := &s.set.chains[i]
		dst[sensor.channel] = c.digital(sensor, s.past.at(i, c.late))
	}
	for _, pair := range s.set.twins {
		dst[s.sensors[pair[0]].channel] = dst[s.sensors[pair[1]].channel]
	}
	s.now++
}

// drive puts the next frame's sub samples into the plant's inputs.
func (s *Source) drive() {
	level := math.Float64frombits(s.level.Load())
	for i, d := range s.drives {
		d.next(s.set.plant.input(i))
	}
	for _, t := range s.set.ties {
		t.mix(s.set.plant.input(t.leader), s.set.plant.input(t.follower))
	}
	for i := range s.drives {
		gain := level
		if s.set.drives != nil {
			gain *= s.set.drives[i]
		}
		if gain != 1 {
			floats.Scale(gain, s.set.plant.input(i))
		}
	}
	for k, b := range s.set.knocks {
		strike(s.set.plant.input(len(s.drives)+k), b.orUsual(), s.now-b.from, s.rateHz)
	}
}

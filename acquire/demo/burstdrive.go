package demo

import (
	"math"
	"math/rand/v2"

	"shakerwatch/acquire/rig"
)

const (
	// burstShare is the share of each period in which a burst drives. The rest is for the structure
	// to come to rest: 1.3 s in the example rig. Of the flexible modes that leaves 0.003 % (-90 dB) at most,
	// of the armatures' sway at 6 Hz 20 % (-14 dB), of the cords' modes 30 to 67 %. Below 10 Hz what
	// is left leaks; above, H is off by 0.1 % in the median. Tests measure it. Our own choice.
	burstShare = 0.35

	// burstEdgeS is how long a burst rises and falls. Common practice, no source: a few periods of
	// the lowest modes, so that amplifiers and stingers are not jerked.
	burstEdgeS = 0.02

	// triggerPauseShare is how much longer than a block and what is kept before a trigger the period is,
	// so that the trigger finds each burst behind a pause.
	triggerPauseShare = 0.05
)

// A burstClock says at which frame each burst starts.
type burstClock struct {
	periodFrames float64 // may be broken; the starts are rounded to whole frames
	firstFrame   int     // frames after the first one read at which a burst starts
}

// newBurstClock returns the clock of a rig. With a period the first frame that is read starts a burst.
// With a trigger it lies in the silence before one, as when a recording is started by hand.
func newBurstClock(r *rig.Rig) burstClock {
	if r.Burst.PeriodS > 0 {
		return burstClock{periodFrames: r.Burst.PeriodS * r.Source.RateHz}
	}
	block := r.Grid.Block * r.Grid.Decimation
	pause := int(math.Ceil(r.Burst.PreTriggerS*r.Source.RateHz + triggerPauseShare*float64(block)))
	return burstClock{periodFrames: float64(block + pause), firstFrame: pause}
}

// start is the frame of burst k; k may be negative.
func (c burstClock) start(k int64) int64 {
	return int64(c.firstFrame) + int64(math.Round(float64(k)*c.periodFrames))
}

// A burstDrive is band-limited Gaussian noise in bursts with silence between them. The white samples
// are faded in and out before they are interpolated, so a burst keeps to its band.
type burstDrive struct {
	randomDrive
	clock burstClock
	sub   int       // sub samples a frame
	fade  []float64 // of each white sample in a burst
	burst int64     // the next one's number
	frame int64     // the next one's number; 0 is the first that is read
	done  int       // white samples of this burst so far
	left  int       // sub samples before the current frame ends
}

// newBurstDrive returns a drive that draws from rng, which it keeps. Its first frame is that of burst
// first of the clock, which is at most 0.
func newBurstDrive(b band, clock burstClock, first int64, sub int, rng *rand.Rand) *burstDrive {
	d := &burstDrive{
		randomDrive: randomDrive{interpolator: newInterpolator(b), rng: rng},
		clock:       clock, sub: sub, burst: first, frame: clock.start(first),
	}
	d.white = make([]float64, 2*d.reach())
	d.fade = burstFade(b, clock.periodFrames*float64(sub), d.reach())
	d.done = len(d.fade)
	return d
}

// burstFade is the weight of each white sample of a burst in a period of so many sub samples: half
// a cosine up and down. The burst with the tail of its interpolation, reach white samples, is burstShare long.
func burstFade(b band, periodSub float64, reach int) []float64 {
	n := max(1, int(burstShare*periodSub/float64(b.every))-reach)
	edge := min(burstEdgeS*b.rateHz/float64(b.every), float64(n)/2)
	fade := make([]float64, n)
	for i := range fade {
		fade[i] = 1
		if to := min(float64(i), float64(n-1-i)) + 0.5; to < edge {
			fade[i] = 0.5 - 0.5*math.Cos(math.Pi*to/edge)
		}
	}
	return fade
}

func (d *burstDrive) next(dst []float64) {
	for i := range dst {
		if d.left == 0 {
			d.nextFrame()
		}
		d.left--
		if d.phase == 0 {
			d.push(d.draw())
		}
		dst[i] = d.at(d.phase, d.white[d.from:d.from+d.reach()])
		d.phase = (d.phase + 1) % len(d.interpolator)
	}
}

// nextFrame starts a burst where one is due. Its white samples count from there, so a burst is the
// same wherever it starts.
func (d *burstDrive) nextFrame() {
	d.left = d.sub
	if d.frame == d.clock.start(d.burst) {
		d.burst++
		d.done, d.phase = 0, 0
	}
	d.frame++
}

// draw returns the next white sample: noise inside a burst, 0 outside.
func (d *burstDrive) draw() float64 {
	if d.done == len(d.fade) {
		return 0
	}
	v := d.fade[d.done] * d.rng.NormFloat64()
	d.done++
	return v
}

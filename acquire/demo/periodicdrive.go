package demo

import (
	"math/rand/v2"

	"shakerwatch/acquire/rig"
)

// A periodicDrive repeats a period of band-limited Gaussian noise some times, then draws a new
// one. From the second repetition on the sub samples are the same bit for bit; in the first the
// interpolator still sees the end of the period before.
type periodicDrive struct {
	interpolator
	rng     *rand.Rand
	repeats int
	white   []float64 // the period, behind as much of what came before as the interpolator reaches back
	at0     int       // of the white sample that the next sub sample follows, 0 to period()-1
	phase   int
	left    int // repetitions of this period still to come, with the current one
}

const (
	// periodicLead is how many periods of a random block are still to come when the first frame is
	// read. Two, so that a comparison of each period with the one before finds one pair alike before
	// the first change.
	periodicLead = 2

	// periodicExtra is how many periods more than are settled and kept a random block lasts.
	periodicExtra = 0
)

// newPeriodicDrive returns a drive that draws from rng, which it keeps. A period has so many frames
// of sub sub samples, of which b.every is a divisor. The first random block has only first repetitions.
func newPeriodicDrive(b band, p rig.Periodic, sub, first int, rng *rand.Rand) *periodicDrive {
	d := &periodicDrive{
		interpolator: newInterpolator(b), rng: rng, left: first + 1,
		repeats: p.SettlePeriods + p.KeepPeriods + periodicExtra,
	}
	d.white = make([]float64, d.reach()-1+p.Period*sub/b.every)
	d.drawPeriod()
	d.at0 = d.period() - 1
	d.phase = b.every - 1
	return d
}

// period is the number of white samples in a period.
func (d *periodicDrive) period() int { return len(d.white) - d.reach() + 1 }

func (d *periodicDrive) drawPeriod() {
	for i := d.reach() - 1; i < len(d.white); i++ {
		d.white[i] = d.rng.NormFloat64()
	}
}

func (d *periodicDrive) next(dst []float64) {
	for i := range dst {
		if d.phase++; d.phase == len(d.interpolator) {
			d.phase = 0
			d.advance()
		}
		dst[i] = d.at(d.phase, d.white[d.at0:d.at0+d.reach()])
	}
}

// advance goes to the next white sample, and where a period ends to the next period.
func (d *periodicDrive) advance() {
	if d.at0++; d.at0 < d.period() {
		return
	}
	d.at0 = 0
	copy(d.white, d.white[d.period():]) // what came before
	if d.left--; d.left == 0 {
		d.left = d.repeats
		d.drawPeriod()
	}
}

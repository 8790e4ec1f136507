package demo

import (
	"fmt"
	"math"

	"shakerwatch/acquire/rig"
)

// runInS is how long the shakers have been running at least when the first frame is read: over seven
// time constants of the slowest flexible mode.
const runInS = 1.0

// newDrives returns a drive for each force of r, all different, and the number of frames that they
// run before the first one is read.
func newDrives(r *rig.Rig, shakers []attached, sub int, seed uint64) (drives []drive, runIn int, err error) {
	rateHz, topHz := r.Source.RateHz, r.Analysis.MaxFrequencyHz
	var build func(b band, label string) drive
	switch r.Analysis.Excitation {
	case "random":
		runIn = int(runInS * rateHz)
		build = func(b band, label string) drive { return newRandomDrive(b, stream(seed, label)) }
	case "burst":
		clock := newBurstClock(r)
		first := -int64(math.Ceil(runInS * rateHz / clock.periodFrames))
		runIn = int(-clock.start(first))
		build = func(b band, label string) drive { return newBurstDrive(b, clock, first, sub, stream(seed, label)) }
	case "periodic":
		period := r.Periodic.Period
		repeats := int(math.Ceil(runInS * rateHz / float64(period)))
		runIn = repeats * period
		build = func(b band, label string) drive {
			b = b.dividing(period, sub)
			return newPeriodicDrive(b, r.Periodic, sub, repeats+periodicLead, stream(seed, label))
		}
	default:
		return nil, 0, fmt.Errorf("%s: excitation %q is not simulated: choose random, burst or periodic",
			r.Path, r.Analysis.Excitation)
	}
	for i, c := range r.Forces {
		drives = append(drives, build(driveBand(rateHz, topHz, sub, shakers[i].driveRMS), "drive "+c.Name))
	}
	return drives, runIn, nil
}

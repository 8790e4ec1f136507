package demo

import "math/rand/v2"

// A randomDrive is band-limited Gaussian noise without end.
type randomDrive struct {
	interpolator
	rng   *rand.Rand
	phase int       // of the next sub sample
	white []float64 // the last white samples twice over, so that any run of them is contiguous
	from  int       // where the oldest white sample lies
}

// newRandomDrive returns a drive that draws from rng, which it keeps.
func newRandomDrive(b band, rng *rand.Rand) *randomDrive {
	d := &randomDrive{interpolator: newInterpolator(b), rng: rng}
	d.white = make([]float64, 2*d.reach())
	for range d.reach() {
		d.push(rng.NormFloat64())
	}
	return d
}

// push puts a white sample in the place of the oldest.
func (d *randomDrive) push(v float64) {
	half := d.reach()
	d.white[d.from], d.white[d.from+half] = v, v
	d.from = (d.from + 1) % half
}

func (d *randomDrive) next(dst []float64) {
	for i := range dst {
		if d.phase == 0 {
			d.push(d.rng.NormFloat64())
		}
		dst[i] = d.at(d.phase, d.white[d.from:d.from+d.reach()])
		d.phase = (d.phase + 1) % len(d.interpolator)
	}
}

package spectra

import "slices"

// onset is the bin of the folded period at whose beginning the forces' energy steps up most, -1
// where it does not, and whether it steps up in another place too.
func (c *BurstCutter) onset() (bin int, more bool) {
	c.foldPeriods()
	floor := burstFloor * slices.Max(c.fold)
	if !(floor > 0) {
		return -1, false
	}
	at := func(b int) float64 { return c.fold[(b+c.bins)%c.bins] }
	rise := func(b int) float64 { return (at(b) + at(b+1)) / (at(b-1) + at(b-2) + 2*floor) }
	for b := range c.bins {
		if rise(b) > rise(bin) {
			bin = b
		}
	}
	if !(rise(bin) >= burstStep) {
		return -1, false
	}
	for b := bin + 4; b <= bin+c.bins-4; b++ {
		more = more || rise(b) >= burstStep
	}
	return bin, more
}

// foldPeriods puts into fold the median over three periods of the mean energy in each bin, about
// the forces' means.
func (c *BurstCutter) foldPeriods() {
	n := int64(burstPeriods * c.period)
	c.meansOver(c.from, n)
	for j, folded := range c.folded {
		clear(folded)
		clear(c.counts)
		before := int64(float64(j+1) * c.period)
		for m := int64(float64(j) * c.period); m < before; m++ {
			bin := min(int((float64(m)-float64(j)*c.period)/c.period*float64(c.bins)), c.bins-1)
			bin = max(bin, 0) // a period that is no whole number begins within a frame
			folded[bin] += c.energyAt(c.from + m)
			c.counts[bin]++
		}
		for b, count := range c.counts {
			folded[b] /= float64(max(count, 1))
		}
	}
	for b := range c.fold {
		x, y, z := c.folded[0][b], c.folded[1][b], c.folded[2][b]
		c.fold[b] = max(min(x, y), min(max(x, y), z))
	}
}

// measure finds where a burst begins that is expected at a place. It is false when the energy does not step up
// there, or frames were lost.
func (c *BurstCutter) measure(expected float64) (at int64, found bool) {
	lo := max(int64(expected)-c.reach, c.tape.oldest())
	n := min(int64(expected)+c.reach-lo, int64(len(c.energies)))
	if n < 2 || c.tape.lastLost(lo, lo+n) >= 0 {
		return 0, false
	}
	// The mean of what ought to be quiet: a load cell's offset is no force.
	c.meansOver(lo, (n+3)/4)
	energies := c.energies[:n]
	for i := range energies {
		energies[i] = c.energyAt(lo + int64(i))
	}
	i, before, after := step(energies, quietFloor)
	return lo + int64(i), after > 0 && after >= burstStep*before
}

// energy is the mean energy of the block at start, about the forces' means over it, and whether it
// holds lost frames or there were some where its burst should be.
func (c *BurstCutter) energy() (mean float64, lost bool) {
	n := int64(c.block)
	c.meansOver(c.start, n)
	for i := range n {
		mean += c.energyAt(c.start + i)
	}
	return mean / float64(n), c.tape.lastLost(max(c.start-c.reach, c.tape.oldest()), max(c.start+n, c.due)) >= 0
}

// meansOver puts the forces' means over n frames into means.
func (c *BurstCutter) meansOver(from, n int64) {
	for i := range c.means {
		c.means[i] = 0
		for m := range n {
			c.means[i] += c.tape.at(i, from+m)
		}
		c.means[i] /= float64(n)
	}
}

// energyAt is the forces' energy in a frame.
func (c *BurstCutter) energyAt(frame int64) float64 {
	var sum float64
	for i, mean := range c.means {
		sum += square(c.tape.at(i, frame) - mean)
	}
	return sum
}

package spectra

import "slices"

// around sums the parts from one on.
func (c *PeriodicCutter) around(from, n int64) (sum part) {
	for a := from; a < from+n; a++ {
		p := c.parts[(a+int64(len(c.parts)))%int64(len(c.parts))]
		sum.difference += p.difference
		sum.energy += p.energy
		sum.raw += p.raw
		sum.lost = sum.lost || p.lost
	}
	return sum
}

// rise is by how much the difference is higher behind a part than before it, and whether that is the
// edge of a change.
func (c *PeriodicCutter) rise(edge int64) (by float64, ok bool) {
	if edge < edgeParts {
		return 0, false
	}
	before, at, after := c.around(edge-edgeParts, edgeParts), c.around(edge, 1), c.around(edge+1, edgeParts)
	if before.lost || at.lost || !after.unlike() {
		return 0, false
	}
	return after.difference - before.difference, before.alike() || after.difference > jump*before.difference
}

// changeAt tells whether the random block changes in a part, or as near to it as can be told, and at which
// frame.
func (c *PeriodicCutter) changeAt(edge int64) (frame int64, ok bool) {
	by, ok := c.rise(edge)
	if !ok || !c.differs(edge) {
		return 0, false
	}
	for a := edge - edgeParts; a <= edge+edgeParts; a++ {
		other, ok := c.rise(a)
		if ok && (other > by || other == by && a < edge) {
			return 0, false
		}
	}
	first := max(0, edge-3*edgeParts) * c.part
	energies := c.step[:(edge+edgeParts+1)*c.part-first]
	for i := range energies {
		var p part
		c.addTo(&p, first+int64(i))
		energies[i] = p.difference
	}
	at, _, _ := step(energies, differenceFloor)
	frame = first + int64(at)
	if c.change > 0 && frame-c.change < edgeParts*c.part {
		return 0, false
	}
	return frame, true
}

// differs tells whether the forces differ over the period behind a part from the one before.
func (c *PeriodicCutter) differs(edge int64) bool {
	var known, unlike int64
	n := c.period/c.part - 2
	for a := edge + 1; a <= edge+n; a++ {
		p := c.around(a, 1)
		if !p.lost {
			known++
		}
		if p.unlike() {
			unlike++
		}
	}
	return 2*known >= n && float64(unlike) >= changedShare*float64(known)
}

// repeats tells whether the forces sound in the kept periods, of which the last frame is the newest one,
// and still repeat at their end, as far as they were not lost; follow has seen to the frames before that.
// power is their mean energy: the median over parts, for which a knock does not count.
func (c *PeriodicCutter) repeats() (power float64, ok bool) {
	c.powers = c.powers[:0]
	for before := c.end(); before-c.part >= c.start+c.period; before -= c.part {
		var p part
		for n := before - c.part; n < before; n++ {
			c.addTo(&p, n)
		}
		if p.lost {
			continue
		}
		if len(c.powers) == 0 && p.unlike() {
			return 0, false // the next random block has begun
		}
		power = 0
		if p.sounds() {
			power = p.energy / float64(c.part)
		}
		c.powers = append(c.powers, power)
	}
	if len(c.powers) == 0 {
		return 0, false // all is lost
	}
	slices.Sort(c.powers)
	power = c.powers[len(c.powers)/2]
	return power, power > 0
}

// repeatsWithin is how many times, 2, 3 or 5, the forces repeat within the first kept period, 0 for once.
func (c *PeriodicCutter) repeatsWithin() int64 {
	for _, d := range [...]int64{2, 3, maxDivisor} {
		if c.period%d != 0 {
			continue
		}
		var p part
		for n := c.start + c.period/d; n < c.start+c.period; n++ {
			before := n - c.period/d
			p.lost = p.lost || c.tape.isLost(n) || c.tape.isLost(before)
			for i, mean := range c.means {
				x, y := c.tape.at(i, n), c.tape.at(i, before)
				p.difference += square(x - y)
				p.energy += (square(x-mean) + square(y-mean)) / 2
			}
		}
		if p.alike() {
			return d
		}
	}
	return 0
}

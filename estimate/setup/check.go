package setup

import (
	"math"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// A check is what the rules look at: the measurements by stage, with the rig and what it resolves to.
type check struct {
	rig      *rig.Rig
	channels []rig.Channel // forces, then responses
	by       [stages]*Measurement

	first, last int // lines that are judged; a rig that was read has some
	spacingHz   float64
	window      spectra.Window
	octaves     []band

	undriven []bool // by force, see notDriven
	hum      hum
}

func newCheck(r *rig.Rig, m []Measurement) *check {
	target := estimate.NewTarget(r)
	c := &check{
		rig:       r,
		channels:  r.Channels(),
		first:     target.First,
		last:      target.Last,
		spacingHz: r.Grid.SpacingHz,
		window:    spectra.Window(r.Analysis.Window),
	}
	for i := range m {
		c.take(&m[i])
	}
	c.octaves = octaves(c.first, c.last, c.spacingHz)
	c.hum = c.findHum()
	c.undriven = c.undrivenForces() // needs the hum
	return c
}

func (c *check) take(m *Measurement) {
	if !m.Stage.valid() {
		panic("setup: no such stage")
	}
	if m.Snapshot != nil && m.Snapshot.Shape != estimate.ShapeOf(c.rig) {
		panic("setup: snapshot has another shape than the rig")
	}
	if m.Tally != nil && m.Tally.Channels() != len(c.channels) {
		panic("setup: tally has another number of channels than the rig")
	}
	c.by[m.Stage] = m
}

// tally is the stage's, nil when it has none or nothing was counted.
func (c *check) tally(s Stage) *Tally {
	if c.by[s] == nil || c.by[s].Tally == nil || c.by[s].Tally.Frames() == 0 {
		return nil
	}
	return c.by[s].Tally
}

// snapshot is the stage's, nil when it has none or no block was averaged.
func (c *check) snapshot(s Stage) *spectra.Snapshot {
	if c.by[s] == nil || c.by[s].Snapshot == nil || c.by[s].Snapshot.Averages == 0 {
		return nil
	}
	return c.by[s].Snapshot
}

// measured tells whether there are densities of all these stages.
func (c *check) measured(list ...Stage) bool {
	for _, s := range list {
		if c.snapshot(s) == nil {
			return false
		}
	}
	return true
}

// usable tells whether a channel shows something in all these stages: one that is dead, railed or
// without drive is reported as that, and whatever else could be said of it follows.
func (c *check) usable(ch int, list ...Stage) bool {
	for _, s := range list {
		if !c.carries(s, ch) || c.driveless(s, ch) {
			return false
		}
	}
	return true
}

// carries tells whether a channel carries a signal in a stage, as far as its samples can tell.
func (c *check) carries(s Stage, ch int) bool { return !c.dead(s, ch) && !c.railed(s, ch) }

// driveless tells whether a channel of the stage with the shakers on has nothing to measure: a force
// that is not driven, and every channel when no force is.
func (c *check) driveless(s Stage, ch int) bool {
	return s == Low && (ch < len(c.undriven) && c.undriven[ch] || c.noDrive())
}

// each calls do with every channel that is usable in all these stages.
func (c *check) each(do func(ch int), list ...Stage) {
	for ch := range c.channels {
		if c.usable(ch, list...) {
			do(ch)
		}
	}
}

// density is a channel's at line k, N²/Hz or (m/s²)²/Hz. The stage must have been measured.
func (c *check) density(s Stage, ch, k int) float64 {
	return density(c.snapshot(s), ch, k)
}

// density is the density of a channel, forces first, at line k.
func density(s *spectra.Snapshot, ch, k int) float64 {
	q, p := s.Forces, s.Responses
	if ch < q {
		return real(s.Gxx[(k*q+ch)*q+ch])
	}
	return s.Gyy[k*p+ch-q]
}

// lastStage is the last of the stages for which is tells true.
func (c *check) lastStage(is func(Stage) bool) (Stage, bool) {
	for s := Stage(stages - 1); s >= 0; s-- {
		if is(s) {
			return s, true
		}
	}
	return 0, false
}

// power is the mean square of a channel in lines b.first to b.last, N² or (m/s²)².
func (c *check) power(s Stage, ch int, b band) float64 {
	var sum float64
	for k := b.first; k <= b.last; k++ {
		sum += c.density(s, ch, k)
	}
	return sum * c.spacingHz
}

// all is the band of all lines that are judged.
func (c *check) all() band { return c.band(c.first, c.last) }

// band is that of lines first to last.
func (c *check) band(first, last int) band { return newBand(first, last, c.spacingHz) }

// limit is a channel's, in N or m/s².
func (c *check) limit(ch int) float64 {
	channel := c.channels[ch]
	return math.Abs(channel.Scale()) * channel.LimitV / channel.FullScaleV
}

// unit is in what densities of the channel are expressed.
func (c *check) unit(ch int) string {
	if ch < len(c.rig.Forces) {
		return "N"
	}
	return "m/s²"
}

// powerDB is 10 log10(a/b) of two powers, NaN unless both are finite and above 0.
func powerDB(a, b float64) float64 {
	db := 10 * math.Log10(a/b)
	if math.IsInf(db, 0) {
		return math.NaN()
	}
	return db
}

// amplitudeDB is 20 log10(a/b) of two amplitudes, NaN unless both are finite and above 0.
func amplitudeDB(a, b float64) float64 { return 2 * powerDB(a, b) }

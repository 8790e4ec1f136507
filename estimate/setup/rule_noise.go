package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

const (
	// noisyDB is how far above the median of its kind a channel's noise is flagged: four times the
	// amplitude, more than sensors of one kind differ by. Our own choice.
	noisyDB = 12

	// riseDB is how far the noise of a band may rise when the amplifiers come on: fourfold power, four
	// times the scatter of the ratio of two bands of four lines at eight averages. Our own choice.
	riseDB = 6
)

// noiseLevels reports each channel's noise in the band of interest with the shakers off, for either
// stage, and flags one whose hiss is far above that of its kind: forces, or responses with the same
// unit in the rig file.
func noiseLevels(c *check) []Finding {
	var found []Finding
	for _, s := range []Stage{Muted, Idle} {
		if !c.measured(s) {
			continue
		}
		hiss := map[int]float64{}
		c.each(func(ch int) { hiss[ch] = c.hiss(s, ch) }, s)
		c.each(func(ch int) {
			found = append(found, c.noiseLevel(s, ch, powerDB(hiss[ch], c.kinMedian(hiss, ch))))
		}, s)
	}
	return found
}

// noiseLevel is the finding about a channel whose hiss is aboveDB above that of its kind.
func (c *check) noiseLevel(s Stage, ch int, aboveDB float64) Finding {
	rms := math.Sqrt(c.power(s, ch, c.all()))
	f := Finding{Stage: s, Number: estimate.Number(rms), Unit: c.unit(ch), channels: []int{ch}}
	switch {
	case math.IsNaN(rms) || math.IsInf(rms, 1):
		f.Severity, f.Number = Look, unknown
		f.Text = fmt.Sprintf("noise unknown with the %s, as densities are no numbers: measure it again", s.Name())
		return f
	case rms == 0:
		f.Severity = Look
		f.Text = fmt.Sprintf("noise 0 %s rms with the %s: look whether the channel is connected", f.Unit, s.Name())
		return f
	}
	f.Text = fmt.Sprintf("noise %.3g %s rms from %v with the %s, %.1f dB below its limit",
		rms, f.Unit, c.all(), s.Name(), amplitudeDB(c.limit(ch), rms))
	if aboveDB >= noisyDB {
		f.Severity = Look
		f.Text += fmt.Sprintf(" and %.1f dB above the median of its kind: look at sensor, cable and connector, and at the gain in front of the converter", aboveDB)
	}
	return f
}

// hiss is the power of a channel's noise without its hum, which is reported as that.
func (c *check) hiss(s Stage, ch int) float64 {
	power := c.power(s, ch, c.all())
	if c.hum.lines[s] != nil {
		power -= squares(c.hum.lines[s][ch])
	}
	return power
}

// kinMedian is the median hiss of the channels of ch's kind. Of two channels neither can be far above
// it, and so neither is accused: it takes three to tell which one is out.
func (c *check) kinMedian(hiss map[int]float64, ch int) float64 {
	var kin []float64
	for other, power := range hiss {
		if c.channels[other].Unit == c.channels[ch].Unit {
			kin = append(kin, power)
		}
	}
	return median(kin)
}

// noiseRises compares the noise of each channel with the amplifiers on to that with them muted, octave
// by octave.
func noiseRises(c *check) []Finding {
	if !c.measured(Muted, Idle) {
		return nil
	}
	var found []Finding
	c.each(func(ch int) { found = append(found, c.noiseRise(ch)) }, Muted, Idle)
	return found
}

func (c *check) noiseRise(ch int) Finding {
	rise := func(b band) float64 { return powerDB(c.power(Idle, ch, b), c.power(Muted, ch, b)) }
	worst, highest := c.all(), math.Inf(-1)
	var risen []band
	for _, b := range c.octaves {
		db := rise(b)
		if db > highest {
			worst, highest = b, db
		}
		if db >= riseDB {
			risen = append(risen, b)
		}
	}
	f := Finding{Stage: Idle, Unit: "dB", channels: []int{ch}, BandsHz: inHz(risen)}
	overall := rise(c.all())
	switch {
	case math.IsNaN(overall):
		f.Number = unknown
		f.Text = "what the amplifiers add to the noise is unknown, as one of its levels is: measure both stages again"
	case len(risen) > 0:
		f.Severity, f.Number = Look, estimate.Number(highest)
		f.Text = fmt.Sprintf("noise rises by %.1f dB from %v%s when the amplifiers come on: lead its cable away from the shaker's, "+
			"lower the amplifier's gain, feed amplifier and conditioner from one outlet, but leave every protective earth on", highest, worst, ofBands(len(risen)))
	default:
		f.Number = estimate.Number(overall)
		f.Text = fmt.Sprintf("noise changes by %+.1f dB when the amplifiers come on", math.Round(10*overall)/10+0) // + 0: no -0.0
	}
	return f
}

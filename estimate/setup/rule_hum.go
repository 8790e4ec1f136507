package setup

import (
	"fmt"
	"math"

	"shakerwatch/estimate"
)

const (
	// humDB is how far a line has to stand above the noise around it to be hum. Chance does not do
	// that to any of thousands of lines at eight averages.
	humDB = 10

	// humLookDB is where hum is flagged: a hundredfold power, which shows in the coherence around that
	// line unless the drive is as far above the noise. Our own choice.
	humLookDB = 20

	// mainsDrift is how far mains may be from their nominal frequency, 0.2 Hz at 50 Hz: the band that
	// European grids allow in steady state (from memory, Regulation (EU) 2017/1485).
	mainsDrift = 0.004

	// humOrders is how many of the lowest harmonics in the band are looked at for a sign of mains at
	// all: transformers hum at the first and second, supplies at the first and third. A tone that
	// meets a high harmonic by chance is no hum.
	humOrders = 3

	// humReach is how many lines on either side, beyond those into which the window spreads a tone,
	// show the noise around it; humMinReach is with how few that can still be said.
	humReach, humMinReach = 10, 4
)

// A humLine is a line of mains hum.
type humLine struct {
	line    int
	hz      float64
	rms     float64 // N or m/s², of the tone alone
	aboveDB float64 // of its highest line above the density around it
}

// hum is what was found with the shakers off.
type hum struct {
	coarse  bool                // the lines lie too far apart to tell
	mainsHz float64             // 50 or 60, NaN when there is none
	lines   [stages][][]humLine // by stage and channel, lowest first; nil where not measured
}

// findHum looks for hum at 50 and 60 Hz and takes that of the two which stands out more, over all
// channels and lines.
func (c *check) findHum() hum {
	best := hum{coarse: c.humReach() < humMinReach, mainsHz: math.NaN()}
	highest := 0.0
	for _, mainsHz := range []float64{50, 60} {
		h := hum{mainsHz: mainsHz}
		sum := 0.0
		for _, s := range []Stage{Muted, Idle} {
			if best.coarse || !c.measured(s) {
				continue
			}
			h.lines[s] = make([][]humLine, len(c.channels))
			c.each(func(ch int) {
				h.lines[s][ch] = c.humLines(s, ch, mainsHz)
				for _, line := range h.lines[s][ch] {
					sum += line.aboveDB
				}
			}, s)
		}
		if sum > highest {
			best, highest = h, sum
		}
	}
	return best
}

// humReach is how many lines beside a tone can show the noise around it: up to halfway to the next
// harmonic of 50 Hz.
func (c *check) humReach() int {
	return min(humReach, int(25/c.spacingHz)-c.window.Smear())
}

// humLines are a channel's lines at mainsHz and its harmonics that stand out.
func (c *check) humLines(s Stage, ch int, mainsHz float64) []humLine {
	var lines []humLine
	orders, found := 0, false
	for order := 1.0; order*mainsHz*(1+mainsDrift) <= float64(c.last)*c.spacingHz; order++ {
		line, ok := c.humLine(s, ch, order*mainsHz)
		if !ok {
			continue
		}
		orders++
		if line.aboveDB >= humDB {
			found = found || orders <= humOrders
			lines = append(lines, line)
		}
	}
	if !found {
		return nil
	}
	return lines
}

// humLine is the highest line near hz, whatever its height; ok is false when it or too little of what
// is around it lies in the band.
func (c *check) humLine(s Stage, ch int, hz float64) (h humLine, ok bool) {
	at := hz / c.spacingHz
	lo := int(math.Ceil(at*(1-mainsDrift) - 0.5))
	hi := int(math.Floor(at*(1+mainsDrift) + 0.5))
	lobe := c.window.Smear()
	if lo-lobe < c.first || hi+lobe > c.last {
		return h, false
	}
	h.line = lo
	for k := lo; k <= hi; k++ {
		if c.density(s, ch, k) > c.density(s, ch, h.line) {
			h.line = k
		}
	}
	var around []float64
	for k := h.line - lobe - c.humReach(); k <= h.line+lobe+c.humReach(); k++ {
		if k >= c.first && k <= c.last && (k < h.line-lobe || k > h.line+lobe) {
			around = append(around, c.density(s, ch, k))
		}
	}
	floor := median(around)
	h.hz = float64(h.line) * c.spacingHz
	h.aboveDB = powerDB(c.density(s, ch, h.line), max(floor, c.flank(s, ch, h.line)))
	h.rms = c.toneRMS(s, ch, h.line, floor)
	return h, len(around) >= humMinReach && !math.IsNaN(h.aboveDB)
}

// flank is the density of the lower of the two lines just beside the main lobe of a tone at line k. A
// tone has fallen by more than 10 dB there, whatever the window; a resonance that is resolved, over
// four lines wide, has not.
func (c *check) flank(s Stage, ch, k int) float64 {
	beside := c.window.Smear() + 1
	lower, upper := max(k-beside, c.first), min(k+beside, c.last)
	return min(c.density(s, ch, lower), c.density(s, ch, upper))
}

// toneRMS is that of a tone whose highest line is k, over a density of floor. The window spreads the
// tone's power over its main lobe, so the sum of these densities times the spacing is the tone's
// mean square (Parseval's theorem). Where the tone lies on a line that is that line's density
// times the window's noise bandwidth (Harris, Proc. IEEE 66, 1978); between two lines the single
// line would be low by up to 1.4 dB for Hann.
func (c *check) toneRMS(s Stage, ch, k int, floor float64) float64 {
	lobe := c.window.Smear()
	b := c.band(k-lobe, k+lobe)
	noise := floor * float64(2*lobe+1) * c.spacingHz
	return math.Sqrt(max(0, c.power(s, ch, b)-noise))
}

// near tells whether line k holds hum of a channel in a stage.
func (h *hum) near(s Stage, ch, k, lobe int) bool {
	if h.lines[s] == nil {
		return false
	}
	for _, line := range h.lines[s][ch] {
		if k >= line.line-lobe && k <= line.line+lobe {
			return true
		}
	}
	return false
}

// mainsHum reports the hum of each channel that has any, by the strongest line. With the amplifiers on
// that counts, and whether it was there before says where to look.
func mainsHum(c *check) []Finding {
	s := Idle
	if !c.measured(Idle) {
		s = Muted
	}
	if !c.measured(s) {
		return nil
	}
	if c.hum.coarse {
		return []Finding{{
			Stage: s, Number: unknown,
			Text: fmt.Sprintf("mains hum is unknown, as lines %.4g Hz apart do not part it from the noise: give a line_spacing of %.3g Hz or less for this check",
				c.spacingHz, 25/float64(humMinReach+c.window.Smear())),
		}}
	}
	var found []Finding
	for ch, lines := range c.hum.lines[s] {
		if len(lines) > 0 {
			found = append(found, c.humFinding(s, ch, lines))
		}
	}
	if found == nil {
		found = append(found, Finding{Stage: s, Unit: "lines", Text: fmt.Sprintf("0 lines of 50 or 60 Hz mains stand out by %d dB with the %s", humDB, s.Name())})
	}
	return found
}

func (c *check) humFinding(s Stage, ch int, lines []humLine) Finding {
	strongest := lines[0]
	f := Finding{Stage: s, Unit: c.unit(ch), channels: []int{ch}}
	highest := 0.0
	for _, line := range lines {
		if line.rms > strongest.rms {
			strongest = line
		}
		highest = max(highest, line.aboveDB)
		lobe := c.window.Smear()
		f.BandsHz = append(f.BandsHz, c.band(line.line-lobe, line.line+lobe).hz)
	}
	if highest >= humLookDB {
		f.Severity = Look
	}
	f.Number = estimate.Number(strongest.rms)
	f.Text = fmt.Sprintf("hum of %g Hz mains, strongest %.3g %s rms at %.4g Hz, %.1f dB above the noise around it",
		c.hum.mainsHz, strongest.rms, f.Unit, strongest.hz, strongest.aboveDB)
	if len(lines) > 1 {
		f.Text += fmt.Sprintf(" (%d lines, %.3g %s rms together)", len(lines), math.Sqrt(squares(lines)), f.Unit)
	}
	f.Text += c.humAdvice(s, ch)
	return f
}

// squares is the mean square of lines together.
func squares(lines []humLine) (sum float64) {
	for _, line := range lines {
		sum += line.rms * line.rms
	}
	return sum
}

// humAdvice says where the hum comes from, by how much of it there was with the amplifiers muted.
func (c *check) humAdvice(s Stage, ch int) string {
	const (
		sensor    = "look for a ground loop: isolate the sensor from the structure and lead its cable away from mains and supplies, but leave every protective earth on"
		amplifier = "lead its cable away from the shaker's, feed amplifier and conditioner from one outlet, but leave every protective earth on"
	)
	if s == Muted || !c.measured(Muted) || !c.usable(ch, Muted) {
		return ": " + sensor
	}
	if squares(c.hum.lines[s][ch]) < squares(c.hum.lines[Muted][ch])*math.Pow(10, riseDB/10.) {
		return ", with the amplifiers muted too: " + sensor
	}
	return ", which comes with the amplifiers: " + amplifier
}

package soundcard

import (
	"math"
	"time"
)

// A gapFinder compares the frames that came with the clock and finds where some are missing, also
// where the device says nothing: a sound server drops frames without a word.
//
// A read that comes late looks like a loss until the reader has caught up, for a sound server may
// keep more in store than it admits to. So a doubt has to settle: the frames read meanwhile are to be
// held back, and only what is missing once frames come at the pace of the clock again is lost. Where
// among those held back it is missing nobody knows, so that they count as lost, too.
type gapFinder struct {
	rateHz float64

	begun   bool
	at      time.Duration // when it last looked
	counted float64       // frames that were read or reported as lost
	normal  float64       // frames by which the clock leads the counted ones when nothing is lost

	doubt doubt
}

// A doubt is whether frames were lost. Its zero value is that there is none.
type doubt struct {
	stands  bool
	certain bool          // the device says that frames were lost
	begun   time.Duration // when it arose
	since   time.Duration // when the reader last caught up a bit, or more was lost
	level   float64       // frames missing then
	least   float64       // frames missing since then, at the least
	dropped float64       // frames that were read and not handed out
}

const (
	// tolerance: less than this is not missed. A sound server changes how late it hands out frames
	// when another program begins or ends to use the device, by as much as one of the pieces in
	// which it hands them out: 55 ms was seen where pieces were of 60 ms. Small losses that nobody
	// declares add up until they are missed.
	tolerance = 100 * time.Millisecond

	// settleTime is how long a doubt must last at one level: several of those pieces, so that one in
	// time shows the truth.
	settleTime = 300 * time.Millisecond

	// storeEnd: what a sound server had in store for a late reader came before the loss, but for the
	// end of it. From when the store is full until the reader has caught up, which takes tenths of a
	// second on a busy machine, pieces come and are dropped by turns.
	storeEnd = time.Second

	// longestDoubt is when a loss is reported that goes on and on.
	longestDoubt = 900 * time.Millisecond

	// drift is how fast a sound card's clock may go away from the computer's. Crystals keep 1e-4
	// (common practice, no source); what is beyond 1e-3 is a loss, be it ever so slow.
	drift = 1e-3
)

// A finding says what is to be done with the frames that were read last and those that are held
// back already, in the order of its fields.
type finding struct {
	drop bool  // those that are held back already are not to be handed out
	lost int64 // frames that were lost before all that are held back, dropped ones included
	hold int   // so many of the last stay held back; those before follow the earlier without loss
}

// observe takes that frames were read by the time at, that queued more are there to be read, that
// held were held back before, and whether the device says that some were lost.
func (g *gapFinder) observe(at time.Duration, frames, queued, held int, overflow bool) finding {
	elapsed := (at - g.at).Seconds() * g.rateHz
	g.at = at
	g.counted += float64(frames)
	lead := at.Seconds()*g.rateHz - g.counted - float64(queued)
	if !g.begun { // whatever was lost before the first frame is not missed
		g.begun = true
		g.normal = lead
		return finding{}
	}
	missing := lead - g.normal
	d := &g.doubt
	switch {
	case !d.certain && !overflow && missing <= g.frames(tolerance):
		*d = doubt{}
		// Frames that come promptly show how far the clock leads when nothing is lost: least, and
		// more only as the clocks drift apart.
		g.normal += min(missing, drift*elapsed)
		return finding{}
	case !d.stands || overflow || missing > d.level+g.frames(tolerance):
		if !d.stands {
			*d = doubt{stands: true, begun: at}
		}
		d.certain = d.certain || overflow
		d.mark(at, missing)
	case missing < d.level-g.frames(tolerance)/4:
		d.mark(at, missing)
		if !d.certain {
			return finding{hold: min(held+frames, int(g.frames(storeEnd)))}
		}
	default:
		d.least = min(d.least, missing)
		if at-d.since >= settleTime {
			return g.settle(held)
		}
	}
	if !d.certain {
		return finding{hold: held + frames}
	}
	if at-d.begun >= longestDoubt {
		rest := missing - d.least
		f := g.settle(held)
		*d = doubt{stands: true, certain: true, begun: at}
		d.mark(at, rest)
		f.hold = frames
		return f
	}
	d.dropped += float64(held)
	return finding{drop: true, hold: frames}
}

// settle ends the doubt, if there is one, while held frames are held back.
func (g *gapFinder) settle(held int) finding {
	d := g.doubt
	if !d.stands {
		return finding{}
	}
	g.doubt = doubt{}
	g.counted += math.Round(d.least)
	return finding{drop: true, lost: max(1, int64(math.Round(d.least)+d.dropped)+int64(held))}
}

// mark begins to wait for the doubt to settle at this level.
func (d *doubt) mark(at time.Duration, missing float64) {
	d.since, d.level, d.least = at, missing, missing
}

func (g *gapFinder) frames(d time.Duration) float64 { return d.Seconds() * g.rateHz }

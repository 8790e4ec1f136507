package monitor

import (
	"shakerwatch/estimate/watch"
	"shakerwatch/web"
)

// A desk remembers what the operator asked for and from which source frame on.
type desk struct {
	stopped bool  // averaging pauses
	pauseAt int64 // blocks that end behind this frame are not averaged while it pauses
	goOnAt  int64 // nor are blocks that start before this one
	freshAt int64 // blocks that start before this frame belong to the average that was given up
}

// paused tells whether a pause touches a block.
func (d *desk) paused(c cut) bool {
	if d.stopped {
		return c.before > d.pauseAt
	}
	return c.start < d.goOnAt && c.before > d.pauseAt
}

// startedOver tells whether a block belongs to an average that was given up.
func (d *desk) startedOver(c cut) bool { return c.start < d.freshAt }

// The operator's kinds of event.
const (
	note    watch.Kind = "note"
	paused  watch.Kind = "paused"
	resumed watch.Kind = "resumed"
	over    watch.Kind = "started-over"
)

// obey does what the operator asks.
func (a *analysis) obey(c web.Command) {
	now := a.from.captured()
	switch c.Kind {
	case web.Pause:
		if a.desk.stopped {
			return
		}
		a.desk.stopped, a.desk.pauseAt = true, now
		a.say(paused, now, "Averaging pauses. Blocks from here on are set aside until it goes on.")
	case web.Resume:
		if !a.desk.stopped {
			return
		}
		a.desk.stopped, a.desk.goOnAt = false, now
		a.say(resumed, now, "Averaging goes on with the next whole block.")
	case web.StartOver:
		a.startOver(now)
		a.say(over, now, "The average was started over. Counts and blocks begin anew.")
	case web.Note:
		a.say(note, now, c.Text)
	case web.Break, web.Mend:
		if a.config.OnBreak != nil {
			a.say(note, now, a.config.OnBreak(c))
		}
	}
}

// say publishes an event of the operator.
func (a *analysis) say(kind watch.Kind, frame int64, text string) {
	n := len(a.events)
	a.events = append(a.events, watch.Event{
		TimeS: float64(frame) / a.config.Rig.Source.RateHz, Block: a.last, SinceBlock: a.last, Edge: watch.Raised,
		Kind: kind, Channels: []string{}, BandsHz: [][2]float64{}, Text: text,
	})
	a.publish(n)
}

// startOver gives the average up, with all counts, and begins anew with blocks that start behind a
// source frame.
func (a *analysis) startOver(frame int64) {
	for _, d := range a.gate.startOver() {
		a.free(d.block)
	}
	a.flush()
	a.average.Reset()
	if a.decay != nil {
		a.decay.Reset()
	}
	a.base = Counts{Frames: 0, Gaps: a.counts.Gaps + a.base.Gaps}
	clear(a.aside)
	a.counts = Counts{Frames: a.counts.Frames}
	a.desk.freshAt = frame
}

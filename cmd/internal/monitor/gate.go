package monitor

import (
	"shakerwatch/estimate/watch"
	"shakerwatch/spectra"
)

// A gate keeps bad blocks out of the average: each block is judged by the watch, waits in probation
// until later ones were judged too, and is then averaged or set aside.
type gate struct {
	rateHz    float64
	watch     *watch.Watch // nil when the blocks wanted are listed
	probation *watch.Probation
	waiting   []decision // judged, in order; those at the front are decided
	decided   int        // of them
	scratch   []watch.Decision
	done      []decision // of the last call of decisions
}

// A decision says what becomes of a block.
type decision struct {
	block    *spectra.Block // nil when it was not transformed
	before   int64          // the source frame behind its last one
	gaps     int64          // stretches of lost frames up to here
	atLimit  bool           // a channel reached its limit
	overload bool

	barred  watch.Kind // why it can't be averaged whatever the watch says, empty when it can
	average bool
	kind    watch.Kind // why it is set aside
}

// Why a block is set aside, besides the kinds of the watch.
const (
	tooSlow    watch.Kind = "too-slow"   // no memory was free: the arithmetic did not keep up
	notListed  watch.Kind = "not-listed" // among the blocks that are wanted
	whilePause watch.Kind = "paused"     // by the operator
)

func newGate(c Config, workers *spectra.Workers) *gate {
	g := &gate{rateHz: c.Rig.Source.RateHz}
	if c.Only == nil {
		g.watch = watch.New(c.Rig, watch.Options{Noise: noiseByChannel(c), Each: workers.Each, Workers: workers.Len()})
		g.probation = watch.NewProbation(c.Rig)
	}
	return g
}

// noiseByChannel are the noise densities, (line, channel), nil without a measurement.
func noiseByChannel(c Config) []float64 {
	if c.Noise == nil {
		return nil
	}
	q, p := len(c.Rig.Forces), len(c.Rig.Responses)
	list := make([]float64, 0, c.Rig.Grid.Lines*(q+p))
	for k := range c.Rig.Grid.Lines {
		list = append(list, c.Noise.Force[k*q:(k+1)*q]...)
		list = append(list, c.Noise.Response[k*p:(k+1)*p]...)
	}
	return list
}

// judge takes the next block and appends the events that it raises or clears. A paused one is not
// judged.
func (g *gate) judge(events []watch.Event, c cut, paused bool) []watch.Event {
	d := decision{block: c.block, before: c.before, gaps: c.gaps, atLimit: c.atLimit != nil, overload: c.overload}
	g.waiting = append(g.waiting, d)
	newest := &g.waiting[len(g.waiting)-1]
	if g.watch == nil {
		newest.average = c.block != nil
		if !newest.average {
			newest.kind = notListed
		}
		g.decided++
		return events
	}
	if paused {
		g.bar(whilePause)
		g.decided++
		return events
	}
	e := watch.Evidence{
		Block: c.index, StartS: float64(c.start) / g.rateHz, EndS: float64(c.before) / g.rateHz,
		Lost: c.lost, AtLimit: c.atLimit,
	}
	if c.block != nil {
		e.Lines = c.block.Lines
	}
	if c.overload {
		newest.barred = tooSlow
	}
	events, j := g.watch.Judge(events, e)
	g.follow(g.probation.Judged(g.scratch[:0], j))
	return events
}

// bar sets every block that waits aside, the newest among them. Those in probation are not spared: who
// pauses because something has gone wrong does not want them.
func (g *gate) bar(why watch.Kind) {
	for i := g.decided; i < len(g.waiting); i++ {
		g.waiting[i].barred, g.waiting[i].kind = why, why
	}
	g.end()
}

// follow enters what probation has decided.
func (g *gate) follow(decisions []watch.Decision) {
	for _, d := range decisions {
		w := &g.waiting[g.decided]
		w.average, w.kind = d.Average && w.block != nil, d.Kind
		if w.barred != "" {
			w.average, w.kind = false, w.barred
		}
		g.decided++
	}
	g.scratch = decisions[:0]
}

// end decides on all blocks that still wait.
func (g *gate) end() {
	if g.probation != nil {
		g.follow(g.probation.End(g.scratch[:0]))
	}
}

// decisions are those made since the last call, in the order of the blocks. They are valid until the next
// block is judged.
func (g *gate) decisions() []decision {
	g.done = append(g.done[:0], g.waiting[:g.decided]...)
	g.waiting = g.waiting[:copy(g.waiting, g.waiting[g.decided:])]
	g.decided = 0
	return g.done
}

// wants tells whether the watch is to learn the average of so many blocks.
func (g *gate) wants(averaged int) bool { return g.watch != nil && g.watch.Wants(averaged) }

func (g *gate) learn(s *spectra.Snapshot) { g.watch.Learn(s) }

// standing appends sentences on what stands, and tells whether a fault is among it.
func (g *gate) standing(dst []string) (sentences []string, fault bool) {
	if g.watch == nil {
		return dst, false
	}
	return g.watch.Standing(dst), g.watch.Faults()
}

// startOver forgets the average and every block that waits, and returns those blocks.
func (g *gate) startOver() (dropped []decision) {
	dropped = append(dropped, g.waiting...)
	g.waiting, g.decided = g.waiting[:0], 0
	if g.watch != nil {
		g.watch.StartOver()
		g.probation.End(nil)
	}
	return dropped
}

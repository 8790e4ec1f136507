package main

import (
	"fmt"
	"hash/fnv"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"strconv"

	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate/watch"
)

// A planned fault is one drawn on a rig, with what is to be said about it.
type planned struct {
	demo.Fault
	answers                   []answer
	pointForce, pointResponse string     // the driving point that the target is part of, if it is
	from, to                  int64      // frames; to is behind the last one
	bandHz                    [2]float64 // that it is about
	factors                   []string   // forces whose pair with the target may be said to disagree by a factor
}

// A plan is a run drawn from a seed: all of it, so that the run can be had again.
type plan struct {
	row      *scenario // of the table
	scenario *scenario // the same, or the one of those in turn
	seed     uint64
	drawn    *demo.RandomRig
	rig      *rig.Rig
	grid     grid
	faults   []planned
	frames   int64 // length of the run
	source   uint64
	truth    []float64 // see forceCoherence; nil until it is asked for
}

// newPlan draws a run. Runs of one seed in two scenarios have nothing in common.
func newPlan(s *scenario, seed uint64) (*plan, error) {
	rng := rand.New(rand.NewPCG(seed, labelled(s.String())))
	p := &plan{row: s, scenario: s.of(seed), seed: seed, source: rng.Uint64()}
	o := demo.RandomOptions{Excitation: p.scenario.setting.excitation}
	if least := p.scenario.shakers; least > 1 {
		o.Shakers = least + rng.IntN(4-least+1)
	}
	for p.rig == nil || !p.shows() {
		var err error
		if p.drawn, err = demo.NewRandomRig(rng.Uint64(), o); err != nil {
			return nil, err
		}
		if p.rig, err = p.scenario.setting.apply(p.drawn); err != nil {
			return nil, err
		}
	}
	p.grid = gridOf(p.rig)
	p.lengths(rng)
	for n, f := range p.scenario.faults {
		p.draw(rng, &p.faults[n], f)
	}
	p.allLost()
	return p, nil
}

// shows tells whether the scenario's faults can be seen on the rig at all. A sensor that is turned cannot, where the structure
// moves along the next axis as along its own: then it is one of another gain, and often of nearly the same.
func (p *plan) shows() bool {
	for _, f := range p.scenario.faults {
		if f.kind != "tilt" || f.on != aDrivingPoint {
			continue
		}
		shows := false
		for a := range p.rig.Forces {
			shows = shows || p.tiltShows(a)
		}
		return shows
	}
	return true
}

// allLost adds what is right when the faults of a run took one force after the other.
func (p *plan) allLost() {
	left := slices.ContainsFunc(names(p.rig.Forces), func(name string) bool { return !p.taken(name) })
	if n := len(p.faults); n > 1 && !left {
		f := &p.faults[n-1]
		f.answers = append(f.answers, answer{kind: watch.NoDrive, who: allForces, why: "no force is left"})
	}
}

func labelled(name string) uint64 {
	h := fnv.New64a()
	h.Write([]byte(name))
	return h.Sum64()
}

// lengths draws when the fault comes and goes, at any frame of a block, and how long the run is.
func (p *plan) lengths(rng *rand.Rand) {
	s := p.scenario
	blocks := func(n int64) int64 { return p.grid.first + (n-1)*p.grid.step + p.grid.length }
	switch {
	case s.faults == nil:
		p.frames = blocks(s.blocks)
		return
	case s.start:
		p.frames = blocks(startBlocks)
		p.faults = append(p.faults, planned{})
		return
	}
	between := func(r [2]int) int { return r[0] + rng.IntN(r[1]-r[0]+1) }
	// In the block behind, where no block before has it: with periodic excitation, only then in any.
	onset := blocks(int64(between(s.setting.healthy)))
	onset += max(0, p.grid.step-p.grid.length) + rng.Int64N(min(p.grid.step, p.grid.length))
	end := onset + int64(between(s.setting.lasts))*p.grid.step + rng.Int64N(p.grid.step)
	for _, f := range s.faults {
		from := onset
		if f.later != [2]int{} {
			from += int64(between(f.later))*p.grid.step + rng.Int64N(p.grid.step)
		}
		p.faults = append(p.faults, planned{from: from, to: end})
	}
	p.frames = blocks(p.grid.behind(end) + int64(s.setting.after))
}

// draw draws whom a fault befalls.
func (p *plan) draw(rng *rand.Rand, d *planned, f fault) {
	rateHz := p.rig.Source.RateHz
	d.Kind, d.Amount = f.kind, f.amount
	d.FromS = float64(d.from) / rateHz
	once := f.kind == "knock" || f.kind == "lost"
	if d.to > 0 && !once {
		d.ToS = float64(d.to) / rateHz
	}
	class := p.target(rng, d, f.on)
	if p.scenario.start {
		class += fromStart
		d.to = p.frames
	}
	switch f.kind {
	case "knock":
		const knockS = 3e-3 // as long as demo's hammer touches
		d.to = d.from + int64(knockS*rateHz) + 1
	case "lost":
		d.to = d.from + 256 // as many as demo loses by default
	}
	topHz := p.rig.Analysis.MaxFrequencyHz
	d.bandHz = [2]float64{p.rig.Analysis.MinFrequencyHz, topHz}
	if f.kind == "tied-band" {
		// demo ties 30 % around 0.3 of max_frequency, less and less to its edges; the inner half of it is tied well.
		d.bandHz = [2]float64{0.3 * topHz * (1 - 0.075), 0.3 * topHz * (1 + 0.075)}
	}
	d.answers = answersTo(f.kind, class, len(p.rig.Forces))
}

// target draws whom a fault befalls and returns the class that the table of right answers has for it.
func (p *plan) target(rng *rand.Rand, d *planned, o on) (class string) {
	forces, responses := names(p.rig.Forces), names(p.rig.Responses)
	pick := func(list []string, n int) []string {
		list = slices.DeleteFunc(slices.Clone(list), p.taken)
		rng.Shuffle(len(list), func(i, j int) { list[i], list[j] = list[j], list[i] })
		return list[:n]
	}
	switch o {
	case aForce, anotherForce:
		d.Target, class = pick(forces, 1), onForce
		if far, ok := falls[d.Kind]; ok && len(forces) > 1 {
			d.Target = p.oneThatFalls(pick, forces, far)
		}
		p.atPoint(d, slices.Index(forces, d.Target[0]))
	case someForces:
		d.Target, class = pick(forces, 2), onForce
	case everyForce:
		d.Target, class = []string{"all"}, onAll
	case aResponse, otherResponse:
		d.Target, class = pick(responses, 1), onResponse
	case twoResponses:
		d.Target, class = pick(responses, 2), onResponse
	case aDrivingPoint:
		i := rng.IntN(len(forces))
		if d.Kind == "tilt" {
			i = p.tiltedPoint(d, i)
		}
		p.atPoint(d, i)
		d.Target, class = []string{d.pointResponse}, onResponse
	case aPlace:
		d.Target = pick(responses, 1)
	case aMode:
		d.Target = []string{strconv.FormatFloat(p.aPeak(rng), 'f', 3, 64)}
	}
	return class
}

// oneThatFalls draws a force that falls far, or takes the one that falls most.
func (p *plan) oneThatFalls(pick func(list []string, n int) []string, forces []string, far fall) []string {
	free := slices.DeleteFunc(slices.Clone(forces), p.taken)
	deepest, name := 0.0, free[0]
	for _, candidate := range pick(forces, len(free)) {
		db := p.fallDB(slices.Index(forces, candidate), far.share)
		if db <= far.farDB {
			return []string{candidate}
		}
		if db < deepest {
			deepest, name = db, candidate
		}
	}
	return []string{name}
}

// tiltedPoint is the first force from i on at whose driving point a turned sensor shows. It notes with which forces a factor
// may be said.
func (p *plan) tiltedPoint(d *planned, i int) int {
	q := len(p.rig.Forces)
	for !p.tiltShows(i % q) {
		i++
	}
	for b, c := range p.rig.Forces {
		if b != i%q && p.tiltOf(i%q, b) != local {
			d.factors = append(d.factors, c.Name)
		}
	}
	return i % q
}

// taken tells whether a fault has a channel already.
func (p *plan) taken(name string) bool {
	return slices.ContainsFunc(p.faults, func(f planned) bool { return slices.Contains(f.Target, name) })
}

// atPoint notes the driving point of force i.
func (p *plan) atPoint(d *planned, i int) {
	d.pointForce = p.rig.Forces[i].Name
	d.pointResponse = p.rig.Responses[p.rig.DrivingPoints()[i]].Name
}

// peakShare is how high a peak is, per the highest one, that a technician would call a mode.
const peakShare = 0.1

// aPeak draws a mode of the middle of the band, where both it and what it becomes lie in the band: a peak of the
// responses to all forces, sqrt of the sum of |H|². What no sensor sees no rule can find.
func (p *plan) aPeak(rng *rand.Rand) float64 {
	truth, topHz := p.drawn.Truth(), p.rig.Analysis.MaxFrequencyHz
	const lines = 1600 // eight lines a hertz at 200 Hz: the narrowest mode is three wide
	var size [lines]float64
	var highest float64
	for k := lines / 10; k < lines; k++ {
		for o := range p.rig.Responses {
			for i := range p.rig.Forces {
				size[k] += abs2(truth.H(topHz*float64(k)/lines, o, i))
			}
		}
		highest = max(highest, size[k])
	}
	var peaks []float64
	for k := lines/10 + 1; k < lines*95/100; k++ {
		if size[k] > size[k-1] && size[k] > size[k+1] && size[k] > peakShare*peakShare*highest {
			peaks = append(peaks, topHz*float64(k)/lines)
		}
	}
	if peaks == nil {
		panic("scenarios: a drawn structure without a mode in its band")
	}
	return peaks[rng.IntN(len(peaks))]
}

func abs2(z complex128) float64 { v := cmplx.Abs(z); return v * v }

func names(channels []rig.Channel) (list []string) {
	for _, c := range channels {
		list = append(list, c.Name)
	}
	return list
}

func (p *plan) String() string {
	text := fmt.Sprintf("%s, seed %d: %s, %d responses", p.row, p.seed, p.drawn.Name, len(p.rig.Responses))
	for _, f := range p.faults {
		text += "; " + f.String()
	}
	return text
}

package watch

import (
	"fmt"
	"math"
	"math/rand/v2"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// A simulated rig of these tests: modes with random shapes, shakers that are driven with a current and whose
// armatures move with the structure, so that forces drop at resonances and depend on each other there a
// little. All figures are our own choice.
type simulated struct {
	rng  *rand.Rand
	rig  *rig.Rig
	q, p int

	omega, damping []float64   // by mode, in rad a sample and as a share of critical
	shape          [][]float64 // (point, mode)
	at             []int       // by channel: its point
	velocity, move []float64   // by mode

	drive    []float64   // by force, N
	mix      []float64   // by force: share of a signal that all have in common
	armature []float64   // by force, kg
	tip      float64     // kg of the load cell beyond its element
	off      []looseness // by force
	gain     []float64   // by channel
	extra    []float64   // by channel: noise in its unit
	noise    []float64   // by channel
	low      []float64   // by channel: pole of a low-pass, 0 is none
	lowPast  []float64
	late     []float64 // by channel: previous sample, for a delay of a part of a sample
	delay    []float64 // by channel, samples, up to 1
	lateral  []float64 // by channel: share of another point's motion, a tilted axis
	copyOf   []int     // by channel: -1, or the channel whose signal it carries
	dead     []bool
	knock    float64 // N, on the first point, this sample only
	past     []float64

	n              int64
	hop            int
	burst          int         // samples that a burst lasts, 0 is for ever
	period         [][]float64 // by force: what is repeated with periodic excitation
	samples        [][]float64 // by channel: the newest block
	free           []float64   // scratch
	force          []float64   // scratch
	accel, current []float64   // scratch
	coupling       []float64   // (force, force): acceleration at one to a force at the other, of all modes free
}

type looseness int

const (
	attached  looseness = iota
	shakerOff           // the stinger is off at the shaker: what is left of it hangs on the cell
	padOff              // cell and stinger hang on the shaker
)

type simOptions struct {
	block      int
	overlap    float64
	window     string
	excitation string
	q, p       int
	memory     int
	onFault    string
	lines      float64 // half-power bandwidth of the modes, in lines, at least
}

func newSimulated(seed uint64, o simOptions) *simulated {
	if o.block == 0 {
		o.block = 1024
	}
	if o.window == "" {
		o.window, o.overlap = "hann", 0.5
	}
	if o.lines == 0 {
		o.lines = 3
	}
	if o.onFault == "" {
		o.onFault = "hold"
	}
	const rateHz = 2560
	r := &rig.Rig{OnFault: o.onFault}
	r.Source.RateHz = rateHz
	r.Analysis = rig.Analysis{MaxFrequencyHz: 1000, Window: o.window, Overlap: o.overlap, Excitation: "random", Averaging: "linear", Estimator: "h1", Memory: o.memory}
	if o.memory > 0 {
		r.Analysis.Averaging = "exponential"
	}
	if o.excitation != "" {
		r.Analysis.Excitation = o.excitation
	}
	hop := int(math.Floor(float64(o.block)*(1-o.overlap) + 0.5))
	s := &simulated{rng: rand.New(rand.NewPCG(seed, 1)), q: o.q, p: o.p, tip: 0.02, hop: hop}
	switch o.excitation {
	case "burst":
		s.burst, hop = o.block/3, 0
	case "periodic":
		hop = 0
		for range o.q {
			s.period = append(s.period, make([]float64, o.block))
		}
	}
	spacing := rateHz / float64(o.block)
	r.Grid = rig.Grid{Decimation: 1, RateHz: rateHz, Block: o.block, Hop: hop, SpacingHz: spacing, Lines: int(1000/spacing) + 1}
	r.Target = rig.Target{RandomError: 0.05, Share: 0.9, DepthDB: 20}
	points := max(o.p, o.q)
	for i := range o.q {
		r.Forces = append(r.Forces, rig.Channel{Index: i, Name: fmt.Sprintf("S%d", i+1), Point: fmt.Sprint(10 + i), Axis: "+z", Unit: "N"})
		s.at = append(s.at, i)
	}
	for k := range o.p {
		axis := "+z"
		if k == 1 {
			axis = "-z"
		}
		r.Responses = append(r.Responses, rig.Channel{Index: o.q + k, Name: fmt.Sprintf("A%dz", 10+k), Point: fmt.Sprint(10 + k), Axis: axis, Unit: "m/s^2"})
		s.at = append(s.at, k)
	}
	s.rig = r
	const modes = 9
	for m := range modes {
		hz := 60 * math.Pow(10, (float64(m)+0.6*s.rng.Float64())/modes)
		s.omega = append(s.omega, 2*math.Pi*hz/rateHz)
		width := spacing * o.lines * (1 + s.rng.Float64())
		s.damping = append(s.damping, width/2/hz)
	}
	s.shape = make([][]float64, points+1)
	for k := range s.shape {
		for range modes {
			s.shape[k] = append(s.shape[k], s.rng.NormFloat64()/math.Sqrt(20))
		}
	}
	s.velocity, s.move = make([]float64, modes), make([]float64, modes)
	c := o.q + o.p
	for ch := range c {
		s.gain = append(s.gain, 1)
		s.copyOf = append(s.copyOf, -1)
		if ch < o.q {
			s.drive = append(s.drive, 10)
			s.armature = append(s.armature, 0.5)
			s.noise = append(s.noise, 0.01)
		} else {
			s.noise = append(s.noise, 0.003)
		}
		if ch > o.q && ch-o.q == 1 {
			s.gain[ch] = -1 // faces down
		}
		s.samples = append(s.samples, make([]float64, o.block))
	}
	s.accel, s.current = make([]float64, modes), make([]float64, o.q)
	for i := range o.q {
		for j := range o.q {
			sum := 0.0
			for m := range modes {
				sum += s.shape[i][m] * s.shape[j][m]
			}
			s.coupling = append(s.coupling, sum)
		}
	}
	s.mix, s.off = make([]float64, o.q), make([]looseness, o.q)
	s.extra, s.low, s.lowPast = make([]float64, c), make([]float64, c), make([]float64, c)
	s.late, s.delay, s.lateral, s.dead = make([]float64, c), make([]float64, c), make([]float64, c), make([]bool, c)
	s.free, s.force, s.past = make([]float64, points+1), make([]float64, o.q), make([]float64, c)
	return s
}

// step makes one sample of every channel in out.
func (s *simulated) step(out []float64) {
	accel, current := s.accel, s.current // accel: of the modes, first without the shakers' forces
	for m, w := range s.omega {
		accel[m] = (-2*s.damping[m]*w*s.velocity[m] - w*w*s.move[m]) + s.shape[len(s.shape)-1][m]*s.knock
	}
	s.knock = 0
	common := s.rng.NormFloat64()
	for i := range current {
		current[i] = s.drive[i] * (math.Sqrt(1-s.mix[i]*s.mix[i])*s.rng.NormFloat64() + s.mix[i]*common)
	}
	s.repeat(current)
	if s.burst > 0 && s.n%int64(len(s.samples[0])) >= int64(s.burst) {
		clear(current)
	}
	s.solve(accel, current)
	for m := range accel {
		for i, f := range s.force {
			accel[m] += s.shape[s.at[i]][m] * f
		}
		s.velocity[m] += accel[m]
		s.move[m] += s.velocity[m]
	}
	for ch := range out {
		v := 0.0
		switch {
		case ch >= s.q:
			for m, a := range accel {
				v += (s.shape[s.at[ch]][m] + s.lateral[ch]*s.shape[len(s.shape)-1][m]) * a
			}
		case s.off[ch] == padOff:
			v = current[ch] * s.tip / (s.armature[ch] + s.tip)
		default:
			v = s.force[ch]
		}
		if s.low[ch] != 0 {
			s.lowPast[ch] += (1 - s.low[ch]) * (v - s.lowPast[ch])
			v = s.lowPast[ch]
		}
		now := v
		v = (1-s.delay[ch])*v + s.delay[ch]*s.past[ch]
		s.past[ch] = now
		v *= s.gain[ch]
		out[ch] = v + (s.noise[ch]+s.extra[ch])*s.rng.NormFloat64()
		if s.dead[ch] {
			out[ch] = 0.25
		}
	}
	for ch, from := range s.copyOf {
		if from >= 0 {
			out[ch] = out[from]
		}
	}
	s.n++
}

// settling is how many periods are left out before the one that is kept.
const settling = 3

// repeat replaces the current by that of a period, which is drawn anew after it was kept.
func (s *simulated) repeat(current []float64) {
	for i, p := range s.period {
		n := s.n % int64(len(p)*(settling+1))
		if n == 0 {
			for k := range p {
				p[k] = s.rng.NormFloat64()
			}
		}
		current[i] = s.drive[i] * p[n%int64(len(p))]
	}
}

// solve finds the forces between armatures and structure: f_i = u_i - m_i a_i, a = free + (shape shape^T) f.
func (s *simulated) solve(accel, current []float64) {
	for i := range s.force {
		s.free[i] = 0
		for m, v := range accel {
			s.free[i] += s.shape[s.at[i]][m] * v
		}
	}
	for range 60 { // Gauss-Seidel; the armatures are light beside the structure
		most := 0.0
		for i := range s.force {
			mass, u := s.armature[i], current[i]
			switch s.off[i] {
			case shakerOff:
				mass, u = s.tip, 0
			case padOff:
				mass, u = 0, 0
			}
			a := s.free[i]
			for j, f := range s.force {
				if j != i {
					a += s.coupling[i*s.q+j] * f
				}
			}
			f := (u - mass*a) / (1 + mass*s.coupling[i*s.q+i])
			most = max(most, math.Abs(f-s.force[i]))
			s.force[i] = f
		}
		if most < 1e-9 {
			return
		}
	}
}

// A run takes a simulated rig's blocks through watch, probation and average, as the pipeline does.
type run struct {
	*simulated
	watch     *Watch
	probation *Probation
	workers   *spectra.Workers
	average   *spectra.Average
	engine    *spectra.Engine
	snapshot  *spectra.Snapshot

	block    int64
	waiting  map[int64]*spectra.Block
	spare    []*spectra.Block
	averaged []int64
	aside    map[int64]Kind
	events   []Event
	last     Judgement

	// At is called before every sample.
	at func(n int64)
}

func newRun(s *simulated, noise []float64) *run {
	g := s.rig.Grid
	window := spectra.Window(s.rig.Analysis.Window).Values(g.Block)
	shape := estimate.ShapeOf(s.rig)
	r := &run{simulated: s, waiting: map[int64]*spectra.Block{}, aside: map[int64]Kind{}}
	r.watch = New(s.rig, Options{Noise: noise})
	r.probation = NewProbation(s.rig)
	r.workers = spectra.NewWorkers(1)
	averaging := estimate.AveragingOf(s.rig)
	averaging.Halves = false
	r.average = spectra.NewAverage(shape, window, g.Hop, 1, g.RateHz, averaging)
	r.engine = spectra.NewEngine(r.average, window, r.workers)
	r.snapshot = spectra.NewSnapshot(shape, averaging)
	out := make([]float64, s.q+s.p)
	for n := range 4 * g.Block { // let it swing in
		_ = n
		s.step(out)
	}
	for n := range g.Block - s.hop {
		s.sample(out, n)
	}
	s.n = int64(g.Block - s.hop)
	return r
}

func (s *simulated) sample(out []float64, at int) {
	s.step(out)
	for ch, v := range out {
		s.samples[ch][at] = v
	}
}

// blocks runs n more blocks.
func (r *run) blocks(n int) {
	g := r.rig.Grid
	out := make([]float64, r.q+r.p)
	for range n {
		if r.block > 0 {
			for ch := range r.samples {
				copy(r.samples[ch], r.samples[ch][r.hop:])
			}
		}
		for range min(1, len(r.period)) * settling * g.Block {
			r.step(out)
		}
		for at := g.Block - r.hop; at < g.Block; at++ {
			if r.at != nil {
				r.at(r.n)
			}
			r.sample(out, at)
		}
		r.judge()
		r.block++
	}
}

func (r *run) judge() {
	g := r.rig.Grid
	var b *spectra.Block
	if n := len(r.spare); n > 0 {
		b, r.spare = r.spare[n-1], r.spare[:n-1]
	} else {
		b = spectra.NewBlock(estimate.ShapeOf(r.rig), g.Block, 0)
	}
	b.Start = r.block * int64(r.hop)
	for ch := range r.samples {
		copy(b.Samples[ch*g.Block:], r.samples[ch])
	}
	r.engine.Transform([]*spectra.Block{b})
	start := float64(b.Start) / g.RateHz
	r.events, r.last = r.watch.Judge(r.events, Evidence{
		Block: r.block, StartS: start, EndS: start + float64(g.Block)/g.RateHz, Lines: b.Lines,
	})
	r.waiting[r.block] = b
	r.decide(r.probation.Judged(nil, r.last))
}

func (r *run) decide(decisions []Decision) {
	for _, d := range decisions {
		b := r.waiting[d.Block]
		delete(r.waiting, d.Block)
		r.spare = append(r.spare, b)
		if !d.Average {
			r.aside[d.Block] = d.Kind
			continue
		}
		r.engine.Add([]*spectra.Block{b})
		r.averaged = append(r.averaged, d.Block)
		if r.watch.Wants(r.average.Len()) {
			r.average.SnapshotTo(r.snapshot)
			r.watch.Learn(r.snapshot)
		}
	}
}

func (r *run) end() {
	r.decide(r.probation.End(nil))
	r.workers.Close()
}

// story is what happened in short.
func (r *run) story() (story []string) {
	for _, e := range r.events {
		story = append(story, fmt.Sprintf("%d %s %s since %d %v %s", e.Block, e.Kind, e.Edge, e.SinceBlock, e.Channels, e.Cause))
	}
	return story
}

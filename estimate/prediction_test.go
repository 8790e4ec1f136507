package estimate

import (
	"math"
	"math/rand/v2"
	"testing"

	"shakerwatch/spectra"
)

// busyRig has two forces, two responses and modes of 4 to 10 lines at random.
func busyRig(rng *rand.Rand) modal {
	m := modal{
		Shape: spectra.Shape{Lines: 301, Forces: 2, Responses: 2}, window: spectra.Hann, block: 768, overlap: 0.5,
		direct: 0.1, noise: 0.3,
	}
	for line := 20.0; line < 290; line += 27 {
		mode := madeMode{line: line + 7*rng.Float64(), bandwidth: 4 + 6*rng.Float64()}
		for range 2 {
			mode.atForce = append(mode.atForce, rng.NormFloat64())
			mode.atSensor = append(mode.atSensor, rng.NormFloat64())
		}
		m.modes = append(m.modes, mode)
	}
	return m
}

// A predicted run is what was predicted on the way, and how many averages were needed when it was over.
type predicted struct {
	blocks []float64
	needed []float64
	ranges [][2]Number
	final  float64
}

func predictedRun(seed uint64) (r predicted) {
	m := busyRig(rand.New(rand.NewPCG(seed, 5)))
	target := m.target()
	target.RandomError = 0.07
	run := m.start(seed)
	e := New(m.Shape, Method{Points: noPoints(2)})
	s := spectra.NewSnapshot(m.Shape, m.Averaging)
	var p Progress
	for blocks := 8; ; blocks = max(blocks+1, blocks*26/25) {
		run.run(blocks)
		run.average.SnapshotTo(s)
		e.Update(s)
		p.Update(e, target)
		r.blocks = append(r.blocks, float64(blocks))
		r.needed = append(r.needed, float64(p.AveragesNeeded))
		r.ranges = append(r.ranges, p.AveragesRange)
		if p.Met {
			r.final = float64(blocks)
			return r
		}
	}
}

// TestPredictionComesTrue: a quarter, half and three quarters of the way, the 90 % range holds what is finally needed
// in about nine of ten runs, and the prediction is within 15 % of it in at least nine of ten from half-way on.
func TestPredictionComesTrue(t *testing.T) {
	const runs = 30
	shares := []float64{0.25, 0.5, 0.75}
	var held, near [3]int
	for seed := range uint64(runs) {
		r := predictedRun(seed)
		for n, share := range shares {
			at := 0
			for r.blocks[at] < share*r.final {
				at++
			}
			lo, hi := float64(r.ranges[at][0]), float64(r.ranges[at][1])
			if lo > r.needed[at] || hi < r.needed[at] {
				t.Errorf("run %d: %v averages needed lie outside the range of %v to %v", seed, r.needed[at], lo, hi)
			}
			// Only every 25th part of the way is looked at.
			if lo <= r.final && hi >= r.final*25/26-1 {
				held[n]++
			}
			if math.Abs(r.needed[at]/r.final-1) < 0.15 {
				near[n]++
			}
		}
	}
	t.Logf("of %d runs, at %v of the way: held %v, near %v", runs, shares, held, near)
	for n := range shares {
		// 27 are expected, with a deviation of 1.6.
		if held[n] < 24 {
			t.Errorf("at %v of the way the range holds the final need in %d of %d runs", shares[n], held[n], runs)
		}
		if n > 0 && near[n] < 27 {
			t.Errorf("at %v of the way the need is within 15 %% in %d of %d runs", shares[n], near[n], runs)
		}
	}
}

// TestRangeIsNotTooWide: a range that holds everything says nothing. A fixed run, half-way: 1.1 to 1.6 from end to end.
func TestRangeIsNotTooWide(t *testing.T) {
	r := predictedRun(1)
	at := 0
	for r.blocks[at] < r.final/2 {
		at++
	}
	if ratio := r.ranges[at][1] / r.ranges[at][0]; ratio < 1.1 || ratio > 1.6 {
		t.Errorf("half-way the range is %v", r.ranges[at])
	}
	last := len(r.ranges) - 1
	if r.ranges[last] != [2]Number{Number(r.needed[last]), Number(r.needed[last])} {
		t.Errorf("in the end the range is %v, want twice %v", r.ranges[last], r.needed[last])
	}
}

// TestUncertaintyOfOneLine: the quantile of one line is that line. Its normal scatter is s; the sum over
// lines gives the variance π/2 s², as of a median of normal values (David and Nagaraja 2003).
func TestUncertaintyOfOneLine(t *testing.T) {
	var p Progress
	const err, free = 0.1, 50.0
	got := p.uncertainty([]float64{err}, err, Target{Share: 0.9}, free, edgeLines{})
	if want := math.Pi / 2 * (1/free + 4*err*err); math.Abs(got-want) > 1e-12 {
		t.Errorf("variance %v, want %v", got, want)
	}
	// A hundred lines that are alike: a hundredth of it, times 1 + 2·0.99·4/9 + 2·0.98/36 with a Hann window's
	// neighbours.
	lines := make([]float64, 100)
	fill(lines, err)
	got = p.uncertainty(lines, err, Target{Share: 0.9, Lines: LineCorrelation{4. / 9, 1. / 36}}, free, edgeLines{})
	want := math.Pi / 200 * (1/free + 4*err*err) * (1 + 2*0.99*4/9 + 2*0.98/36)
	if math.Abs(got-want) > 1e-12 {
		t.Errorf("variance %v of a hundred lines, want %v", got, want)
	}
}

// TestEdgeLines: 40 lines a unit of ln |H|² on a straight stretch, each with a scatter of 0.1: their
// number has the variance 40·0.1/√π, and a maximum with a scatter of 0.02 adds (40·0.02)².
func TestEdgeLines(t *testing.T) {
	l := edgeLines{floorErr: 0.01}
	for n := range 400 {
		l.add(math.Exp((float64(n)-199.5)/80), 0.05) // ln |H|² in steps of a 40th
	}
	if want := 40*0.1/math.Sqrt(math.Pi) + 0.64; math.Abs(l.variance()-want) > 0.01*want {
		t.Errorf("variance %v, want %v", l.variance(), want)
	}
}

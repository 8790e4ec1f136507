package main

import (
	"bytes"
	"fmt"

	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
)

// A setting is how a rig is analysed, and how long the parts of a run on it are, in hops: from one block's start to the
// next.
type setting struct {
	name       string
	excitation string  // empty is random
	block      int     // samples; 0 is what the drawn rig has, 4096
	overlap    float64 // random only
	window     string  // random only; empty is Hann
	settle     int     // periods, periodic only
	keep       int

	healthy [2]int // blocks that are averaged before the onset: from, to
	lasts   [2]int // hops that a fault stands: from, to
	after   int    // hops from its end to the run's
}

// base is the setting of most rows; lengths as a technician would meet them.
var base = setting{name: "Hann 50 %", overlap: 0.5, healthy: [2]int{24, 40}, lasts: [2]int{12, 20}, after: 15}

// varied is base with another analysis.
func varied(name string, change func(s *setting)) setting {
	s := base
	s.name = name
	change(&s)
	return s
}

// settings beside base. The periodic one is short: a random block is five periods long.
var settings = []setting{
	varied("Hann 0 %", func(s *setting) { s.overlap = 0 }),
	varied("Hann 75 %", func(s *setting) { s.overlap = 0.75 }),
	varied("block 1024", func(s *setting) { s.block = 1024 }),
	varied("block 6144", func(s *setting) { s.block = 6144 }),
	varied("flat top 50 %", func(s *setting) { s.window = "flattop" }),
	varied("flat top 75 %", func(s *setting) { s.window, s.overlap = "flattop", 0.75 }),
	varied("rectangular 0 %", func(s *setting) { s.window, s.overlap = "rectangular", 0 }),
	varied("rectangular 50 %", func(s *setting) { s.window = "rectangular" }),
	varied("burst", func(s *setting) { s.excitation, s.overlap = "burst", 0 }),
	varied("periodic", func(s *setting) {
		s.excitation, s.overlap, s.block, s.settle, s.keep = "periodic", 0, 2048, 3, 2
		s.healthy, s.lasts, s.after = [2]int{14, 20}, [2]int{8, 12}, 10
	}),
}

// apply returns a drawn rig with the setting's analysis, by way of its rig file.
func (s *setting) apply(r *demo.RandomRig) (*rig.Rig, error) {
	text := r.Text
	if s.excitation == "" {
		lines := fmt.Sprintf("[analysis]\noverlap = %g\n", s.overlap)
		if s.window != "" {
			lines += fmt.Sprintf("window = %q\n", s.window)
		}
		text = replaceOnce(text, "[analysis]\n", lines)
	}
	if s.block != 0 {
		rateHz, drawn := r.Rig.Source.RateHz, float64(r.Rig.Grid.Block)
		switch s.excitation {
		case "periodic":
			p, lines := r.Rig.Periodic, "period = %d\nsettle_periods = %d\nkeep_periods = %d\n"
			text = replaceOnce(text, fmt.Sprintf(lines, p.Period, p.SettlePeriods, p.KeepPeriods), fmt.Sprintf(lines, s.block, s.settle, s.keep))
		default:
			text = replaceOnce(text, fmt.Sprintf("line_spacing = %.10g\n", rateHz/drawn), fmt.Sprintf("line_spacing = %.10g\n", rateHz/float64(s.block)))
		}
	}
	return rig.Parse("drawn.toml", text)
}

// replaceOnce panics where a drawn rig file does not look as it did when this was written.
func replaceOnce(text []byte, old, with string) []byte {
	if bytes.Count(text, []byte(old)) != 1 {
		panic("scenarios: the drawn rig file does not have once " + old)
	}
	return bytes.Replace(text, []byte(old), []byte(with), 1)
}

// A grid is where blocks lie, in source frames: the k-th from first + k step on, length frames.
type grid struct{ first, step, length int64 }

// gridOf is where the blocks of a sound run lie. With burst and periodic excitation they are found in the signals, and
// lie there to within a few frames.
func gridOf(r *rig.Rig) grid {
	g := grid{length: r.BlockFrames()}
	switch r.Analysis.Excitation {
	case "random":
		g.step = int64(r.Grid.Hop * r.Grid.Decimation)
	case "burst":
		g.step = int64(r.Burst.PeriodS*r.Source.RateHz + 0.5)
	default:
		p := r.Periodic
		const lead = 2 // periods until the first change that is seen: see demo.New
		g.step = int64((p.SettlePeriods + p.KeepPeriods) * p.Period)
		g.first = int64((lead + p.SettlePeriods) * p.Period)
	}
	return g
}

// holding is the number of the first block that holds a frame, which is the first that ends behind it.
func (g grid) holding(frame int64) int64 {
	over := frame - g.first - g.length + 1
	if over <= 0 {
		return 0
	}
	return (over + g.step - 1) / g.step
}

// behind is the number of the first block that starts at a frame or behind it.
func (g grid) behind(frame int64) int64 { return max(0, (frame-g.first+g.step-1)/g.step) }

// hops is the number of the block that ends at a frame, counted from block n, to the nearest.
func (g grid) hops(endFrame float64, n int64) int64 {
	return int64((endFrame-float64(g.first+g.length))/float64(g.step)+0.5) - n
}

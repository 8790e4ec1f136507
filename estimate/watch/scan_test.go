package watch

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// TestAScanFindsTheWorstWindow: of all that exceed their limit, in the fewest blocks.
func TestAScanFindsTheWorstWindow(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 6))
		cells := rapid.IntRange(1, 70).Draw(t, "cells")
		l := &layout{p: 2, cells: newCells(3, 3+cells*cellLines+rapid.IntRange(-1, 6).Draw(t, "rest"), 1)}
		l.between = correlation{c2: [][]float64{{1}}}
		s := newScan(l, 1, oneByOne)
		s.learn(30)
		blocks := rapid.IntRange(0, longest).Draw(t, "blocks before")
		for block := range blocks + 1 {
			loud := rapid.Float64Range(0.5, 3).Draw(t, "loud")
			for c := range s.now {
				s.now[c] = cellLines * loud * rng.ExpFloat64()
			}
			if block < blocks {
				s.keep(int64(block))
			}
		}
		s.scan()
		for o, got := range s.result {
			if want := s.definition(o); got.blocks != want.blocks || got.fresh != want.fresh || math.Abs(got.excess-want.excess) > 1e-9*(1+math.Abs(want.excess)) {
				t.Fatalf("response %d: %+v, want %+v", o, got, want)
			}
		}
	})
}

// definition is a reading cell by cell.
func (s *scan) definition(o int) (r reading) {
	n := s.layout.cells.n
	sum := make([]float64, n)
	add := func(u []float64) {
		for c, v := range u[o*n : (o+1)*n] {
			sum[c] += v
		}
	}
	add(s.now)
	for _, v := range sum {
		r.excess += v
	}
	r.excess -= float64(s.layout.cells.lines())
	taken := 0
	for b, blocks := range blockCounts {
		for ; taken < blocks-1; taken++ {
			if taken == len(s.recent) {
				return r
			}
			add(s.recent[len(s.recent)-1-taken].u)
		}
		most := 1.0
		for _, w := range s.limits[b] {
			for lo := 0; lo+w.cells <= n; lo++ {
				limit := w.limit
				if lo+w.cells == n {
					limit = w.ended
				} else if lo%w.step != 0 {
					continue
				}
				window := 0.0
				for _, v := range sum[lo : lo+w.cells] {
					window += v
				}
				if window > most*limit {
					most, r.blocks = window/limit, blocks
					r.fresh = freshIn(s.now[o*n+lo:o*n+lo+w.cells], s.layout.cells.judged(w.cells, lo+w.cells == n))
				}
			}
		}
		if r.blocks > 0 {
			return r
		}
	}
	return r
}

package watch

import (
	"fmt"
	"slices"
	"testing"

	"shakerwatch/spectra"
)

// judging returns a run whose watch is armed, and the evidence on its newest, normal block.
func judging(o simOptions) (*run, Evidence) {
	r := newRun(newSimulated(7, o), nil)
	for !r.watch.armed || len(r.watch.scan.recent) < longest {
		r.blocks(1)
	}
	b := r.waiting[r.block-1]
	return r, Evidence{Block: r.block - 1, EndS: 1, Lines: b.Lines}
}

var sizes = []simOptions{
	{q: 2, p: 14, block: 4096},
	{q: 1, p: 3, block: 4096},
	{q: 4, p: 60, block: 4096},
}

// BenchmarkBlock compares what a block costs: its transform and sums, which are there anyway, and its
// judgement.
func BenchmarkBlock(b *testing.B) {
	for _, o := range sizes {
		r, e := judging(o)
		block := *r.waiting[r.block-1]
		block.Lines = slices.Clone(block.Lines)
		one := []*spectra.Block{&block}
		name := fmt.Sprintf("%d forces, %d responses, %d samples", o.q, o.p, o.block)
		average := spectra.NewAverage(r.average.Shape(), spectra.Hann.Values(o.block), r.hop, 1, r.rig.Grid.RateHz, r.average.Averaging())
		engine := spectra.NewEngine(average, spectra.Hann.Values(o.block), r.workers)
		b.Run(name+"/transform and sums", func(b *testing.B) {
			for b.Loop() {
				block.Start += int64(r.hop)
				engine.Transform(one)
				engine.Add(one)
			}
		})
		var blocks [][]complex128 // one block again and again is not a healthy run
		for range 6 {
			r.blocks(1)
			blocks = append(blocks, slices.Clone(r.waiting[r.block-1].Lines))
		}
		b.Run(name+"/judge", func(b *testing.B) {
			for b.Loop() {
				e.Block++
				e.Lines = blocks[e.Block%int64(len(blocks))]
				r.events, _ = r.watch.Judge(r.events[:0], e)
			}
		})
		b.Run(name+"/learn", func(b *testing.B) {
			r.average.SnapshotTo(r.snapshot)
			for b.Loop() {
				r.watch.Learn(r.snapshot)
			}
		})
	}
}

func TestJudgingANormalBlockAllocatesNothing(t *testing.T) {
	const runs = 20
	r, e := judging(simOptions{q: 2, p: 6})
	defer r.end()
	w := New(r.rig, Options{})
	r.average.SnapshotTo(r.snapshot)
	w.Learn(r.snapshot)
	var blocks [][]complex128
	for range runs + 1 {
		r.blocks(1)
		blocks = append(blocks, slices.Clone(r.waiting[r.block-1].Lines))
	}
	var events []Event
	allocs := testing.AllocsPerRun(runs, func() {
		e.Block++
		e.Lines, blocks = blocks[0], blocks[1:]
		var j Judgement
		events, j = w.Judge(events[:0], e)
		if !j.Normal() || !j.Armed || len(events) > 0 {
			t.Fatalf("%+v of a normal block", j)
		}
	})
	if allocs != 0 {
		t.Errorf("%v allocations a block, want none", allocs)
	}
}

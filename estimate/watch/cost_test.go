package watch

import (
	"fmt"
	"math"
	"slices"
	"testing"
	"time"

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
	{q: 1, p: 3, block: 4096},
	{q: 2, p: 14, block: 4096},
	{q: 4, p: 60, block: 4096},
	{q: 8, p: 504, block: 4096},
	{q: 8, p: 504, block: 16384},
}

// BenchmarkBlock compares what a block costs on one worker: its transform and sums, which are there anyway, and its
// judgement. They run in turn, and ratio is the second over the first, which is to stay below 1. To repeat, with 3 GB of memory
// free:
//
//	go test ./estimate/watch -run '^$' -bench BenchmarkBlock -cpu 1 -benchtime 2s
func BenchmarkBlock(b *testing.B) {
	for _, o := range sizes {
		b.Run(fmt.Sprintf("%dx%d at %d", o.q, o.p, o.block), func(b *testing.B) {
			r, e := judging(o)
			defer r.workers.Close()
			var blocks []*spectra.Block // one block again and again is not a healthy run
			for range 6 {
				r.blocks(1)
				block := *r.waiting[r.block-1]
				block.Samples, block.Lines = slices.Clone(block.Samples), slices.Clone(block.Lines)
				blocks = append(blocks, &block)
			}
			e.Block = r.block
			var sums, judge stopwatch
			for b.Loop() {
				e.Block++
				one := blocks[e.Block%int64(len(blocks)):][:1]
				one[0].Start = e.Block * int64(r.hop)
				start := time.Now()
				r.engine.Transform(one)
				transformed := time.Now()
				e.Lines = one[0].Lines
				var j Judgement
				r.events, j = r.watch.Judge(r.events[:0], e)
				judged := time.Now()
				r.engine.Add(one)
				sums.enter(e.Block, transformed.Sub(start)+time.Since(judged))
				judge.enter(e.Block, judged.Sub(transformed))
				if !j.Normal() || !j.Compared {
					b.Fatalf("%+v of a normal block", j)
				}
			}
			b.ReportMetric(sums.meanUS(), "µs-transform+sums")
			b.ReportMetric(judge.meanUS(), "µs-judge")
			b.ReportMetric(judge.meanUS()/sums.meanUS(), "ratio")
		})
	}
}

// A stopwatch keeps the least time of each turn, the block's index modulo recentEvery, as some is done at every so many
// blocks only. What else the machine does only adds to the others.
type stopwatch [recentEvery]time.Duration

func (s *stopwatch) enter(block int64, spent time.Duration) {
	if least := &s[block%recentEvery]; *least == 0 || spent < *least {
		*least = spent
	}
}

// meanUS is the mean over the turns in µs, NaN when one did not come up.
func (s *stopwatch) meanUS() (us float64) {
	for _, least := range s {
		if least == 0 {
			return math.NaN()
		}
		us += float64(least) / recentEvery / 1e3
	}
	return us
}

// BenchmarkLearn is what learning an average costs, which is done whenever it grew by an eighth.
func BenchmarkLearn(b *testing.B) {
	for _, o := range sizes {
		b.Run(fmt.Sprintf("%dx%d at %d", o.q, o.p, o.block), func(b *testing.B) {
			r, _ := judging(o)
			defer r.workers.Close()
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

package main

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"time"
)

// A way is one in which a contestant can do the job.
type way struct {
	name string // for the reader
	env  []string
	argv func(blocks int) []string // for a recording of so many blocks
}

// programWay is the one way of this project.
func (b *bench) programWay() (way, error) {
	self, err := os.Executable()
	return way{argv: func(blocks int) []string {
		s := b.size
		return words(self, programWord, b.recording(), s.Forces, s.Responses, s.Block, blocks, b.cores)
	}}, err
}

// numpyWays are the ways of with_numpy.py.
func (b *bench) numpyWays() ([]way, error) {
	script := filepath.Join(b.dir, "with_numpy.py")
	if err := os.WriteFile(script, numpySource, 0o600); err != nil {
		return nil, err
	}
	var ways []way
	for _, sums := range []string{"rows", "matmul"} {
		for _, together := range b.togethers(1, 4, 16) {
			ways = append(ways, way{
				name: fmt.Sprintf("%s, blocks together: %d", sums, together),
				env:  []string{fmt.Sprintf("OPENBLAS_NUM_THREADS=%d", b.cores)},
				argv: func(blocks int) []string {
					s := b.size
					return words(b.python, script, b.recording(), s.Forces, s.Responses, s.Block, s.lines(), blocks, sums, together)
				},
			})
		}
	}
	return ways, nil
}

// A limitWay is a way of limit.c.
type limitWay struct {
	program  string
	group    int
	in, out  string
	together int
	waiting  string // of threads, "" for the library's
}

// passive threads sleep while they wait for work.
const passive = "passive"

func (b *bench) limitWay(l limitWay) way {
	w := way{
		name: fmt.Sprintf("channels at a time: %d, samples by %s, lines by %s, blocks together: %d", l.group, l.in, l.out, l.together),
		argv: func(blocks int) []string {
			return words(l.program, b.recording(), blocks, b.cores, l.in, l.out, l.together)
		},
	}
	if l.waiting != "" {
		w.name += ", threads wait " + l.waiting
		w.env = []string{"OMP_WAIT_POLICY=" + l.waiting}
	}
	return w
}

// fastestLimit tries the ways of limit.c: first the layouts, then with the best one how many blocks
// go together, then how threads wait.
func (b *bench) fastestLimit(ctx context.Context) (way, error) {
	var layouts []limitWay
	for _, group := range []int{8, 4, 2, 1} {
		if b.size.channels()%group != 0 || len(layouts) >= 8 {
			continue
		}
		program, err := buildLimit(ctx, b.dir, b.size, group)
		if err != nil {
			return way{}, err
		}
		for _, in := range []string{"frames", "channels"} {
			for _, out := range []string{"lines", "channels"} {
				layouts = append(layouts, limitWay{program, group, in, out, 1, passive})
			}
		}
	}
	best, err := fastest(ctx, b, layouts, b.limitWay, byCPU)
	if err != nil {
		return way{}, err
	}
	var more []limitWay
	for _, together := range b.togethers(1, 2, 4, 16) {
		l := best
		l.together = together
		more = append(more, l)
	}
	if best, err = fastest(ctx, b, more, b.limitWay, byCPU); err != nil {
		return way{}, err
	}
	eager := best
	eager.waiting = "" // threads that wait for work spin, which costs processor time but no other
	best, err = fastest(ctx, b, []limitWay{best, eager}, b.limitWay, byShortest)
	return b.limitWay(best), err
}

// togethers are those numbers of blocks that a contestant may hold and the recording has.
func (b *bench) togethers(numbers ...int) []int {
	return slices.DeleteFunc(numbers, func(n int) bool { return n > 1 && n > min(b.size.together(), b.blocks()) })
}

// fastest tries every candidate on the beginning of the recording and returns the one that a score says was
// the fastest.
func fastest[T any](ctx context.Context, b *bench, candidates []T, toWay func(T) way, score func(trial) time.Duration) (T, error) {
	best, lowest := candidates[0], time.Duration(0)
	if len(candidates) == 1 {
		return best, nil
	}
	for _, candidate := range candidates {
		tried, err := b.try(ctx, toWay(candidate))
		if err != nil {
			return best, err
		}
		if s := score(tried); lowest == 0 || s < lowest {
			best, lowest = candidate, s
		}
	}
	return best, nil
}

// A trial is what a way took a job.
type trial struct {
	cpu      time.Duration // processor time
	shortest time.Duration // in the best of many turns
}

// byCPU judges by processor time, on which the rest of the machine has the least influence. It is for ways that
// keep as many cores busy as the others do.
func byCPU(t trial) time.Duration { return t.cpu }

func byShortest(t trial) time.Duration { return t.shortest }

// try does jobs for a turn's processor time.
func (b *bench) try(ctx context.Context, w way) (t trial, err error) {
	const turns, mostBlocks = 16, 16
	c, err := start(ctx, w.env, w.argv(min(b.blocks(), mostBlocks))...)
	if err != nil {
		return t, err
	}
	if t.shortest, err = c.jobs(1); err != nil {
		return t, err
	}
	before, err := c.cpu()
	if err != nil {
		return t, err
	}
	jobs, done := jobsIn(b.turn/turns, t.shortest), 0
	for spent := time.Duration(0); spent < b.turn; {
		took, err := c.jobs(jobs)
		if err != nil {
			return t, err
		}
		after, err := c.cpu()
		if err != nil {
			return t, err
		}
		spent, done = after-before, done+jobs
		t.cpu = spent / time.Duration(done)
		t.shortest = min(t.shortest, took/time.Duration(jobs))
	}
	return t, c.close()
}

// jobsIn is how many jobs of a length fill a turn, at least one.
func jobsIn(turn, job time.Duration) int { return max(1, int(turn/max(job, 1))) }

func words(list ...any) []string {
	var text []string
	for _, word := range list {
		text = append(text, fmt.Sprint(word))
	}
	return text
}

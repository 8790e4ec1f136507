package main

import (
	"context"
	"math"
	"sync"
)

// A suite is which runs of which scenarios are played.
type suite struct {
	scenarios []scenario
	from      uint64 // first seed
	runs      int    // of each scenario, which some multiply
	again     int    // runs of each scenario that are played again to compare the bits
	workers   int    // runs at a time

	// done is told of each run that ended, one at a time; nil is nobody.
	done func(t *tally, o *outcome, ended, of int)
}

// runsOf is how many runs of a scenario are played.
func (s *suite) runsOf(c *scenario) int {
	if c.share == 0 {
		return s.runs
	}
	return max(1, int(math.Round(c.share*float64(s.runs))))
}

// play plays all runs, several at a time, and returns a tally of each scenario in order. The outcomes depend on the seeds
// only. It ends at the first error, or when ctx does.
func (s *suite) play(ctx context.Context) ([]*tally, error) {
	ctx, stop := context.WithCancelCause(ctx)
	defer stop(nil)
	type job struct {
		tally *tally
		n     int
	}
	var jobs []job
	tallies := make([]*tally, len(s.scenarios))
	for i := range s.scenarios {
		c := &s.scenarios[i]
		tallies[i] = &tally{scenario: c, outcomes: make([]*outcome, s.runsOf(c))}
		for n := range tallies[i].outcomes {
			jobs = append(jobs, job{tallies[i], n})
		}
	}
	var mu sync.Mutex
	next, ended := 0, 0
	take := func() (job, bool) {
		mu.Lock()
		defer mu.Unlock()
		if next == len(jobs) || ctx.Err() != nil {
			return job{}, false
		}
		next++
		return jobs[next-1], true
	}
	var running sync.WaitGroup
	for range max(1, s.workers) {
		running.Go(func() {
			for j, ok := take(); ok; j, ok = take() {
				o, err := s.one(ctx, j.tally.scenario, j.n)
				if err != nil {
					stop(err)
					return
				}
				mu.Lock()
				j.tally.outcomes[j.n] = o
				ended++
				if s.done != nil {
					s.done(j.tally, o, ended, len(jobs))
				}
				mu.Unlock()
			}
		})
	}
	running.Wait()
	return tallies, context.Cause(ctx)
}

// one plays run n of a scenario.
func (s *suite) one(ctx context.Context, c *scenario, n int) (*outcome, error) {
	p, err := newPlan(c, s.from+uint64(n))
	if err != nil {
		return nil, err
	}
	r, err := p.play(ctx, n < s.again)
	if err != nil {
		return nil, err
	}
	return assess(p, r), nil
}

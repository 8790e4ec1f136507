package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"time"
)

// A bench is the measurement of one size.
type bench struct {
	options
	size size
	dir  string
}

func (b *bench) blocks() int { return b.size.blocks() }

func (b *bench) recording() string { return filepath.Join(b.dir, "recording.f64") }

// The contestants, in the order in which they are named.
const (
	ours = iota
	numpys
	limits
	contestants
)

// A result is what a race has shown.
type result struct {
	size   size
	blocks int
	cores  int
	rounds int

	about   [contestants]string
	ways    [contestants]string
	speeds  [contestants][]float64 // channel samples per second in each round
	perCore [contestants]float64   // channel samples per second of processor time
	peakMiB [contestants]float64
	apart   [contestants]float64 // from ours, in largest values of an array
	others  float64              // share of all cores that other programs took meanwhile
}

// measure tries the ways, runs the race and compares the results.
func (b *bench) measure(ctx context.Context) (*result, error) {
	if err := writeRecording(b.recording(), b.size, b.blocks()); err != nil {
		return nil, err
	}
	defer os.Remove(b.recording())
	ways, err := b.chooseWays(ctx)
	if err != nil {
		return nil, err
	}
	r := &result{size: b.size, blocks: b.blocks(), cores: b.cores, rounds: b.rounds}
	var running [contestants]*contestant
	for i, w := range ways {
		c, err := start(ctx, w.env, w.argv(b.blocks())...)
		if err != nil {
			return nil, err
		}
		defer c.close()
		running[i], r.about[i], r.ways[i] = c, c.about, w.name
	}
	if err := b.race(r, running); err != nil {
		return nil, err
	}
	r.apart, err = compare(b.size, running)
	return r, err
}

func (b *bench) chooseWays(ctx context.Context) (ways [contestants]way, err error) {
	if ways[ours], err = b.programWay(); err != nil {
		return ways, err
	}
	tried, err := b.numpyWays()
	if err != nil {
		return ways, err
	}
	if ways[numpys], err = fastest(ctx, b, tried, func(w way) way { return w }, byCPU); err != nil {
		return ways, err
	}
	ways[limits], err = b.fastestLimit(ctx)
	return ways, err
}

// race has the contestants take turns, each round beginning with another one.
func (b *bench) race(r *result, running [contestants]*contestant) error {
	var jobs [contestants]int
	for i, c := range running {
		if _, err := c.jobs(1); err != nil { // warms up
			return err
		}
		took, err := c.jobs(1)
		if err != nil {
			return err
		}
		jobs[i] = jobsIn(b.turn, took)
	}
	before, err := usage(running)
	if err != nil {
		return err
	}
	samples := b.size.samples(b.blocks())
	for round := range b.rounds {
		for place := range running {
			i := (round + place) % contestants
			took, err := running[i].jobs(jobs[i])
			if err != nil {
				return err
			}
			r.speeds[i] = append(r.speeds[i], samples*float64(jobs[i])/took.Seconds())
		}
	}
	after, err := usage(running)
	if err != nil {
		return err
	}
	others := after.machine - before.machine
	for i, c := range running {
		took := after.contestants[i] - before.contestants[i]
		others -= took
		r.perCore[i] = samples * float64(jobs[i]*b.rounds) / took.Seconds()
		if r.peakMiB[i], err = c.peakMiB(); err != nil {
			return err
		}
	}
	all := time.Duration(runtime.NumCPU()) * after.at.Sub(before.at)
	r.others = max(0, others.Seconds()/all.Seconds())
	return nil
}

// ratios are how many times as fast as another contestant ours was in each round.
func (r *result) ratios(other int) []float64 {
	var list []float64
	for round, speed := range r.speeds[ours] {
		list = append(list, speed/r.speeds[other][round])
	}
	return list
}

// tolerance is by how much of an array's largest value results may differ: sums of some ten
// thousand products that are rounded in another order stay far below it.
const tolerance = 1e-9

// disagreement is an error where the results differ.
func (r *result) disagreement() error {
	var list []error
	for i, apart := range r.apart {
		if !(apart <= tolerance) { // so that NaN counts
			list = append(list, fmt.Errorf("%v: %s differs by %.1e of the largest value", r.size, names[i], apart))
		}
	}
	return errors.Join(list...)
}

// The aim: how many times as fast as NumPy and as C, at one size on so many cores.
const (
	aimNumPy = 4.0
	aimLimit = 0.75
	aimCores = 2
)

var aimSize = size{4, 60, 4096}

// aimed tells whether the aim is for this result.
func (r *result) aimed() bool { return r.size == aimSize && r.cores == aimCores }

// miss is an error where the aim was missed.
func (r *result) miss() error {
	if !r.aimed() {
		return nil
	}
	x, c := median(r.ratios(numpys)), median(r.ratios(limits))
	if x >= aimNumPy && c >= aimLimit {
		return nil
	}
	return fmt.Errorf("%v: %.2f times NumPy and %.2f of C miss the aim of %g and %g", r.size, x, c, aimNumPy, aimLimit)
}

// median sorts the values.
func median(values []float64) float64 {
	slices.Sort(values)
	n := len(values)
	return (values[(n-1)/2] + values[n/2]) / 2
}

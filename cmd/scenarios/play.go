package main

import (
	"context"
	"fmt"
	"math"
	"slices"

	"shakerwatch/acquire/demo"
	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/estimate/watch"
)

// A played run is what the pipeline made of a plan.
type played struct {
	events []watch.Event
	starts []int64 // first frames of the averaged blocks
	seen   int64
	ne     float64 // effective averages
	differ string  // what came out differently the second time, empty for nothing
}

// play runs a plan. again plays it twice more: with the averaged blocks listed, and with two workers.
func (p *plan) play(ctx context.Context, again bool) (*played, error) {
	source, err := p.drawn.Source(p.rig, p.source)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", p, err)
	}
	var faults []demo.Fault
	for _, f := range p.faults {
		faults = append(faults, f.Fault)
	}
	if err := source.SetFaults(faults...); err != nil {
		return nil, fmt.Errorf("%s: %w", p, err)
	}
	t, err := record(source, p.frames)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", p, err)
	}
	result, err := p.through(ctx, t, 1, nil)
	if err != nil {
		return nil, err
	}
	out := &played{
		events: result.Events, starts: slices.Collect(result.Snapshot.Starts.All()),
		seen: result.Seen, ne: result.Snapshot.EffectiveAverages,
	}
	if again {
		out.differ, err = p.again(ctx, t, result)
	}
	return out, err
}

// through plays a tape through the pipeline.
func (p *plan) through(ctx context.Context, t *tape, workers int, only []int64) (*monitor.Result, error) {
	result, err := monitor.Run(ctx, monitor.Config{Rig: p.rig, Source: t.play(), Workers: workers, Only: only})
	if err == nil {
		err = ctx.Err()
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w", p, err)
	}
	return result, nil
}

// again compares a result with those of the same frames on two workers, and of the averaged blocks alone.
func (p *plan) again(ctx context.Context, t *tape, want *monitor.Result) (differ string, err error) {
	got, err := p.through(ctx, t, 2, nil)
	if err != nil {
		return "", err
	}
	same := func(a, b watch.Event) bool { return fmt.Sprint(a) == fmt.Sprint(b) }
	if !slices.EqualFunc(got.Events, want.Events, same) {
		differ += "other events with two workers; "
	}
	if !sameBits(got, want) {
		differ += "other bits with two workers; "
	}
	if want.Averaged == 0 {
		return differ, nil
	}
	got, err = p.through(ctx, t, 1, slices.Collect(want.Snapshot.Starts.All()))
	if err != nil {
		return "", err
	}
	if !sameBits(got, want) {
		differ += "other bits from the averaged blocks alone; "
	}
	return differ, nil
}

// sameBits compares the averages and estimates of two runs.
func sameBits(a, b *monitor.Result) bool {
	floats := func(x, y float64) bool { return math.Float64bits(x) == math.Float64bits(y) }
	numbers := func(x, y complex128) bool { return floats(real(x), real(y)) && floats(imag(x), imag(y)) }
	return slices.EqualFunc(a.Snapshot.Gxx, b.Snapshot.Gxx, numbers) &&
		slices.EqualFunc(a.Snapshot.Gyx, b.Snapshot.Gyx, numbers) &&
		slices.EqualFunc(a.Snapshot.Gyy, b.Snapshot.Gyy, floats) &&
		slices.EqualFunc(a.Estimates.H, b.Estimates.H, numbers) &&
		slices.EqualFunc(a.Estimates.RandomError, b.Estimates.RandomError, floats) &&
		slices.Equal(slices.Collect(a.Snapshot.Starts.All()), slices.Collect(b.Snapshot.Starts.All()))
}

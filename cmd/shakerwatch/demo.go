package main

import (
	"context"

	"shakerwatch/acquire"
	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
)

// demoSeed makes every demo the same run.
const demoSeed = 1

// demo runs the simulated rig that is built in.
func (a *app) demo(ctx context.Context, _ []string) error {
	return a.simulate(ctx, demo.Rig())
}

// live runs the rig file's source.
func (a *app) live(ctx context.Context, args []string) error {
	r, err := rig.Read(args[0])
	if err != nil {
		return unusable(err)
	}
	if r.Source.Kind != "demo" {
		return unusablef("%s: source kind %q is not built into this version: choose \"demo\", or replay a recording", r.Path, r.Source.Kind)
	}
	return a.simulate(ctx, r)
}

// simulate runs the simulated structure with a rig file's channels, in real time.
func (a *app) simulate(ctx context.Context, r *rig.Rig) error {
	if err := computable(r); err != nil {
		return unusable(err)
	}
	source, err := demo.New(r, demoSeed)
	if err != nil {
		return unusable(err)
	}
	return a.measure(ctx, measurement{
		rig:    r,
		kind:   "demo",
		stream: source,
		pace:   func(ctx context.Context, s acquire.Source) acquire.Source { return acquire.Pace(ctx, s, 1) },
		live:   true,
	})
}

package main

import (
	"context"

	"shakerwatch/acquire"
	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
	"shakerwatch/acquire/wav"
)

// restS is how long the simulated skid takes to come to rest on its cords, in seconds of its own
// time, which pass at once.
const restS = 120

// demoSeed makes every demo the same run.
const demoSeed = 1

// demo runs the simulated rig that is built in.
func (a *app) demo(ctx context.Context, _ []string) error {
	in, err := simulated(demo.RigFor(a.excitation))
	if err != nil {
		return unusable(err)
	}
	return a.measure(ctx, in.measurement)
}

// simulated is the simulated structure with a rig file's channels, in real time.
func simulated(r *rig.Rig) (*input, error) {
	source, err := demo.New(r, demoSeed)
	if err != nil {
		return nil, err
	}
	return &input{
		measurement: measurement{rig: r, kind: "demo", stream: source, pace: realTime, live: true},
		encoding:    wav.Float32,
		drive: func(share float64) {
			source.SetDrive(share)
			discard(source, restS)
		},
	}, nil
}

// realTime makes a source that does not wait by itself come as fast as it would be captured.
func realTime(ctx context.Context, s acquire.Source) acquire.Source { return acquire.Pace(ctx, s, 1) }

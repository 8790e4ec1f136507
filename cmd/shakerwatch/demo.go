package main

import (
	"context"
	"fmt"
	"text/tabwriter"

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
	if len(a.faults) == 1 && a.faults[0] == "list" {
		return a.listFaults()
	}
	in, err := a.simulated(demo.RigFor(a.excitation))
	if err != nil {
		return unusable(err)
	}
	return a.measure(ctx, in.measurement)
}

// simulated is the simulated structure with a rig file's channels, in real time.
func (a *app) simulated(r *rig.Rig) (*input, error) {
	source, err := demo.New(r, demoSeed)
	if err != nil {
		return nil, err
	}
	b := &breaker{rig: r, source: source}
	for _, text := range a.faults {
		f, err := demo.ParseFault(text)
		if err != nil {
			return nil, fmt.Errorf("--fault: %w", err)
		}
		b.faults = append(b.faults, f)
	}
	if err := source.SetFaults(b.faults...); err != nil {
		return nil, fmt.Errorf("--fault: %w", err)
	}
	return &input{
		measurement: measurement{rig: r, kind: "demo", stream: source, pace: realTime, live: true, breaker: b},
		encoding:    wav.Float32,
		drive: func(share float64) {
			source.SetDrive(share)
			discard(source, restS)
		},
	}, nil
}

// realTime makes a source that does not wait by itself come as fast as it would be captured.
func realTime(ctx context.Context, s acquire.Source) acquire.Source { return acquire.Pace(ctx, s, 1) }

// listFaults prints what can break on the simulated rig.
func (a *app) listFaults() error {
	fmt.Fprintln(a.stdout, "--fault KIND@FROM-TO:TARGET=AMOUNT; end, target and amount can be left out where the kind has none.")
	t := tabwriter.NewWriter(a.stdout, 0, 0, 2, ' ', 0)
	for _, k := range demo.FaultKinds() {
		fmt.Fprintf(t, "%s\t%s\t%s\n", k.Name, k.Target, k.Help)
	}
	return t.Flush()
}

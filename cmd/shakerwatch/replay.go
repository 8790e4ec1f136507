package main

import (
	"context"
	"fmt"

	"shakerwatch/acquire"
	"shakerwatch/acquire/rig"
	"shakerwatch/acquire/wav"
	"shakerwatch/cmd/internal/results"
)

// replay runs a recording through the path of live capture.
func (a *app) replay(ctx context.Context, args []string) error {
	r, err := rig.Read(args[0])
	if err != nil {
		return unusable(err)
	}
	recording, err := wav.Open(args[1])
	if err != nil {
		return unusable(err)
	}
	defer recording.Close()
	if err := fits(r, recording, args[1]); err != nil {
		return unusable(err)
	}
	only, err := a.onlyStarts(r, recording.Frames())
	if err != nil {
		return unusable(err)
	}
	for _, w := range recording.Warnings() {
		fmt.Fprintf(a.stderr, "warning: %s\n", w)
	}
	factor := a.pace
	if a.headless && !a.flags.Changed("pace") {
		factor = 0
	}
	return a.measure(ctx, measurement{
		rig:    r,
		kind:   "recording",
		stream: recording,
		pace: func(ctx context.Context, s acquire.Source) acquire.Source {
			if factor == 0 {
				return s
			}
			return acquire.Pace(ctx, s, factor)
		},
		frames: recording.Frames(),

		replayed: args[1],

		only: only,
	})
}

// fits tells whether a recording is one of the rig and holds a block.
func fits(r *rig.Rig, recording *wav.Reader, path string) error {
	if err := r.CheckStream(path, recording.RateHz(), recording.Channels()); err != nil {
		return err
	}
	if frames := r.BlockFrames(); recording.Frames() < frames {
		return fmt.Errorf("%s: %d frames are less than one block of %d: give a longer recording, or choose a wider line_spacing", path, recording.Frames(), frames)
	}
	return nil
}

// onlyStarts reads the block starts that --only names and checks that they are blocks of this
// recording. It returns nil without --only.
func (a *app) onlyStarts(r *rig.Rig, frames int64) ([]int64, error) {
	if a.only == "" {
		return nil, nil
	}
	starts, err := results.BlockStarts(a.only)
	if err != nil {
		return nil, err
	}
	d := int64(r.Grid.Decimation)
	step := int64(r.Grid.Hop) * d
	if step == 0 { // blocks that are found in the signals lie anywhere
		step = d
	}
	for i, s := range starts {
		switch {
		case s < 0 || s%step != 0:
			return nil, fmt.Errorf("%s: no block of %s starts at frame %d: give the summary of a run with the same [analysis]", a.only, r.Path, s)
		case s+r.BlockFrames() > frames:
			return nil, fmt.Errorf("%s: the block at frame %d lies beyond the %d frames of the recording: give the summary of this recording", a.only, s, frames)
		case i > 0 && s <= starts[i-1]:
			return nil, fmt.Errorf("%s: block_starts are not in ascending order at frame %d: give a summary as it was written", a.only, s)
		}
	}
	if starts == nil {
		starts = []int64{}
	}
	return starts, nil
}

package main

import (
	"context"
	"fmt"
	"path/filepath"

	"shakerwatch/acquire"
	"shakerwatch/acquire/record"
)

// recordingFile is the recording's name in a results folder.
const recordingFile = "recording.wav"

// recordingPath is where the recording goes, empty when there is to be none.
func (a *app) recordingPath() string {
	switch {
	case a.record != "":
		return a.record
	case a.out != "" && !a.noRecord:
		return filepath.Join(a.out, recordingFile)
	default:
		return ""
	}
}

// recorded is the input's measurement with everything that is captured going to a recording, if there
// is to be one.
func (a *app) recorded(in *input) measurement {
	m := in.measurement
	path := a.recordingPath()
	if path == "" {
		return m
	}
	m.record = func() (*record.Recorder, error) {
		return record.Create(path, record.Options{
			RateHz: m.stream.RateHz(), Channels: m.stream.Channels(), Encoding: in.encoding, Replace: a.replace,
		})
	}
	m.recording = path
	return m
}

// tee has the recorder see every frame before anything else can fail.
func tee(pace func(context.Context, acquire.Source) acquire.Source, r *record.Recorder) func(context.Context, acquire.Source) acquire.Source {
	if r == nil {
		return pace
	}
	return func(ctx context.Context, s acquire.Source) acquire.Source { return record.Tee(pace(ctx, s), r) }
}

// recorderTrouble says what is wrong with the recording, for the verdict's reasons.
func recorderTrouble(r *record.Recorder) []string {
	if r == nil {
		return nil
	}
	if err := r.Err(); err != nil {
		return []string{fmt.Sprintf("the recording has ended: %v; the watch goes on", err)}
	}
	if n := r.Counts().Dropped; n > 0 {
		return []string{fmt.Sprintf("the disk is too slow: the recording lacks %d frames; the watch goes on", n)}
	}
	return nil
}

// closeRecorder ends the recording and tells what it holds.
func (a *app) closeRecorder(m measurement, r *record.Recorder) {
	if r == nil {
		return
	}
	err := r.Close()
	c := r.Counts()
	fmt.Fprintf(a.stdout, "recording: %s, %d frames", m.recording, c.Frames)
	if c.Dropped > 0 {
		fmt.Fprintf(a.stdout, ", %d more were lost to the disk", c.Dropped)
	}
	fmt.Fprintln(a.stdout)
	if err != nil {
		fmt.Fprintf(a.stderr, "warning: %v\n", err)
	}
}

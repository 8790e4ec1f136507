// Package results writes what a run leaves behind: estimates.npz, summary.json and events.jsonl.
//
// It knows file formats and how to write files so that a reader never sees half of one. It may not
// know how a number is computed.
package results

import (
	"encoding/json"
	"fmt"
	"io"

	"shakerwatch/acquire/rig"
	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/estimate/setup"
)

// The files of a results folder.
const (
	EstimatesFile = "estimates.npz"
	SummaryFile   = "summary.json"
	EventsFile    = "events.jsonl"

	NoiseFile    = "noise.npz" // of a setup check
	FindingsFile = "setup.txt" // of a setup check
)

// Write puts the three files of a result into the folder: the summary last, so that whoever finds a
// new summary finds the files that belong to it.
func (f *Folder) Write(r *rig.Rig, s Source, noise *Noise, result *monitor.Result) error {
	return f.putAll([]file{
		{EstimatesFile, func(w io.Writer) error { return writeEstimates(w, result) }},
		{EventsFile, func(w io.Writer) error { return writeEvents(w, result) }},
		{SummaryFile, func(w io.Writer) error { return writeSummary(w, r, s, noise, result) }},
	})
}

// WriteSetup puts what a setup check has found into the folder.
func (f *Folder) WriteSetup(noise *setup.Noise, findings []setup.Finding) error {
	return f.putAll([]file{
		{FindingsFile, func(w io.Writer) error { return setup.WriteFindings(w, findings) }},
		{NoiseFile, func(w io.Writer) error { return writeNoise(w, noise) }},
	})
}

// A file is a name and what writes the content.
type file struct {
	name  string
	write func(io.Writer) error
}

// putAll puts files into the folder, in order.
func (f *Folder) putAll(files []file) error {
	for _, file := range files {
		if err := f.put(file.name, file.write); err != nil {
			return fmt.Errorf("write %s: %w", f.path(file.name), err)
		}
	}
	f.written = true
	return nil
}

func writeEvents(w io.Writer, result *monitor.Result) error {
	lines := json.NewEncoder(w)
	lines.SetEscapeHTML(false)
	for _, e := range result.Events {
		if err := lines.Encode(e); err != nil {
			return err
		}
	}
	return nil
}

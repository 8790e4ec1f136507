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
)

// The files of a results folder.
const (
	EstimatesFile = "estimates.npz"
	SummaryFile   = "summary.json"
	EventsFile    = "events.jsonl"
)

// Write puts the three files of a result into the folder: the summary last, so that whoever finds a
// new summary finds the files that belong to it.
func (f *Folder) Write(r *rig.Rig, s Source, result *monitor.Result) error {
	files := []struct {
		name  string
		write func(io.Writer) error
	}{
		{EstimatesFile, func(w io.Writer) error { return writeEstimates(w, result) }},
		{EventsFile, func(w io.Writer) error { return writeEvents(w, result) }},
		{SummaryFile, func(w io.Writer) error { return writeSummary(w, r, s, result) }},
	}
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

package results

import (
	"encoding/json"
	"fmt"
	"io"
	"os"

	"shakerwatch/acquire/rig"
	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/estimate"
)

// Source is what summary.json says about where the samples came from.
type Source struct {
	Kind     string  `json:"kind"` // "recording" for a replay
	RateHz   float64 `json:"rate_hz"`
	Channels int     `json:"channels"`
	Frames   int64   `json:"frames"` // in the recording, or captured so far
}

type summary struct {
	Title             string           `json:"title"`
	Source            Source           `json:"source"`
	Analysis          analysis         `json:"analysis"`
	BlocksSeen        int64            `json:"blocks_seen"`
	BlocksAveraged    int64            `json:"blocks_averaged"`
	BlocksSetAside    int64            `json:"blocks_set_aside"`
	BlockStarts       []int64          `json:"block_starts"`
	EffectiveAverages float64          `json:"effective_averages"`
	Verdict           estimate.Verdict `json:"verdict"`
	AveragesNeeded    estimate.Number  `json:"averages_needed"`
	Gaps              int64            `json:"gaps"`
	Overranges        int64            `json:"overranges"`
	Noise             *Noise           `json:"noise"` // null without a noise measurement
}

type analysis struct {
	RateHz        float64 `json:"rate_hz"`
	Decimation    int     `json:"decimation"`
	Block         int     `json:"block"`
	Hop           *int    `json:"hop"` // null for burst and periodic
	LineSpacingHz float64 `json:"line_spacing_hz"`
	Window        string  `json:"window"`
	Estimator     string  `json:"estimator"`
	Excitation    string  `json:"excitation"`
}

func writeSummary(w io.Writer, r *rig.Rig, s Source, noise *Noise, result *monitor.Result) error {
	hop := &r.Grid.Hop
	if r.Analysis.Excitation != "random" {
		hop = nil
	}
	starts := []int64{}
	for start := range result.Snapshot.Starts.All() {
		starts = append(starts, start)
	}
	text := json.NewEncoder(w)
	text.SetEscapeHTML(false)
	text.SetIndent("", "  ")
	return text.Encode(summary{
		Title:  r.Title,
		Source: s,
		Analysis: analysis{
			RateHz: r.Grid.RateHz, Decimation: r.Grid.Decimation, Block: r.Grid.Block, Hop: hop,
			LineSpacingHz: r.Grid.SpacingHz, Window: r.Analysis.Window,
			Estimator: r.Analysis.Estimator, Excitation: r.Analysis.Excitation,
		},
		BlocksSeen:        result.Seen,
		BlocksAveraged:    result.Averaged,
		BlocksSetAside:    result.SetAside,
		BlockStarts:       starts,
		EffectiveAverages: result.Snapshot.EffectiveAverages,
		Verdict:           result.Verdict,
		AveragesNeeded:    result.Progress.AveragesNeeded,
		Gaps:              result.Gaps,
		Overranges:        result.Overranges,
		Noise:             noise,
	})
}

// maxSummary bounds what is read of a summary: far more than the starts of a day's blocks take.
const maxSummary = 64 << 20

// BlockStarts reads the list of averaged blocks from a summary.json.
func BlockStarts(path string) ([]int64, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("%s: %w: give the summary.json of an earlier run", path, cause(err))
	}
	defer file.Close()
	var read struct {
		BlockStarts *[]int64 `json:"block_starts"`
	}
	if err := json.NewDecoder(io.LimitReader(file, maxSummary)).Decode(&read); err != nil {
		return nil, fmt.Errorf("%s: no summary (%w): give the summary.json of an earlier run", path, err)
	}
	if read.BlockStarts == nil {
		return nil, fmt.Errorf("%s: it has no block_starts: give the summary.json of an earlier run", path)
	}
	return *read.BlockStarts, nil
}

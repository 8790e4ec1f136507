package results

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"

	"shakerwatch/acquire/rig"
	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
)

// Source is what summary.json says about where the samples came from.
type Source struct {
	Kind     string  `json:"kind"` // "recording" for a replay
	RateHz   float64 `json:"rate_hz"`
	Channels int     `json:"channels"`
	Frames   int64   `json:"frames"` // in the recording, or captured so far
}

type summary struct {
	Title             string               `json:"title"`
	Source            Source               `json:"source"`
	Analysis          analysis             `json:"analysis"`
	BlocksSeen        int64                `json:"blocks_seen"`
	BlocksAveraged    int64                `json:"blocks_averaged"`
	BlocksSetAside    int64                `json:"blocks_set_aside"`
	SetAside          map[watch.Kind]int64 `json:"set_aside"` // why, by kind; "held" was normal by itself while a fault stood
	BlockStarts       []int64              `json:"block_starts"`
	EffectiveAverages float64              `json:"effective_averages"`
	Verdict           estimate.Verdict     `json:"verdict"`
	AveragesNeeded    estimate.Number      `json:"averages_needed"`

	AveragesNeededRange [2]estimate.Number   `json:"averages_needed_range"` // holds it in nine of ten cases
	Confidence          confidence           `json:"confidence"`
	ChanceLevel         chanceLevel          `json:"chance_level"`
	Resonances          []estimate.Resonance `json:"resonances"` // never null
	Leakage             *leakage             `json:"leakage"`    // null when lines are close enough
	Drift               *drift               `json:"drift"`      // null when unknown
	DecayDB             *estimate.Number     `json:"decay_db"`   // of the channel that has died out least; null but for burst

	Gaps       int64  `json:"gaps"`
	Overranges int64  `json:"overranges"`
	Noise      *Noise `json:"noise"` // null without a noise measurement
}

type analysis struct {
	RateHz        float64 `json:"rate_hz"`
	Decimation    int     `json:"decimation"`
	Block         int     `json:"block"`
	Hop           *int    `json:"hop"` // null for burst and periodic
	LineSpacingHz float64 `json:"line_spacing_hz"`
	Window        string  `json:"window"`
	Estimator     string  `json:"estimator"`
	Whitened      bool    `json:"whitened"` // hv by the noise measurement
	Averaging     string  `json:"averaging"`
	Memory        *int    `json:"memory"` // blocks; null for linear averaging
	Excitation    string  `json:"excitation"`
}

// confidence says what regions confidence_radius describes.
type confidence struct {
	Level        float64 `json:"level"`
	Simultaneous bool    `json:"simultaneous"`
}

// chanceLevel are the coherences that chance alone stays below with a probability.
type chanceLevel struct {
	Probability float64         `json:"probability"`
	Multiple    estimate.Number `json:"multiple_coherence"`
	Partial     estimate.Number `json:"partial_coherence"`
	Force       estimate.Number `json:"force_coherence"` // null with one force
}

// leakage is about the narrowest resonance.
type leakage struct {
	FrequencyHz   float64         `json:"frequency_hz"`
	BandwidthHz   estimate.Number `json:"bandwidth_hz"`
	PeakLow       float64         `json:"peak_low"`        // |H| at its peak, as a share
	LineSpacingHz float64         `json:"line_spacing_hz"` // that would do
}

// drift is that of the frequency response that drifts most.
type drift struct {
	Response string          `json:"response"`
	Force    string          `json:"force"`
	Ratio    estimate.Number `json:"ratio"`  // see the array drift
	Change   estimate.Number `json:"change"` // beyond the random error, relative to |H|
	Beyond   bool            `json:"beyond_chance"`
}

// leakageOf is nil without leakage.
func leakageOf(result *monitor.Result) *leakage {
	l, found := result.Resonances.Leakage()
	if !found {
		return nil
	}
	return &leakage{l.Narrowest.FrequencyHz, l.Narrowest.BandwidthHz, l.Low, l.SpacingHz}
}

// driftOf is nil when no drift is known.
func driftOf(r *rig.Rig, result *monitor.Result) *drift {
	d := result.Drift
	n, beyond := d.Beyond(estimate.NewTarget(r))
	if !beyond {
		n = -1
		for m, ratio := range d.Ratio {
			if ratio == ratio && (n < 0 || ratio > d.Ratio[n]) {
				n = m
			}
		}
	}
	if n < 0 {
		return nil
	}
	q := len(r.Forces)
	return &drift{
		Response: r.Responses[n/q].Name, Force: r.Forces[n%q].Name,
		Ratio: estimate.Number(d.Ratio[n]), Change: estimate.Number(d.Change[n]), Beyond: beyond,
	}
}

// worstDecay is nil but for burst excitation.
func worstDecay(result *monitor.Result) *estimate.Number {
	if result.DecayDB == nil {
		return nil
	}
	worst := math.NaN()
	for _, db := range result.DecayDB {
		if !(db <= worst) && db == db {
			worst = db
		}
	}
	n := estimate.Number(worst)
	return &n
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
	e := result.Estimates
	var memory *int
	if r.Analysis.Memory > 0 {
		memory = &r.Analysis.Memory
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
			Estimator: r.Analysis.Estimator, Whitened: e.Method.NoiseForce != nil,
			Averaging: r.Analysis.Averaging, Memory: memory, Excitation: r.Analysis.Excitation,
		},
		BlocksSeen:        result.Seen,
		BlocksAveraged:    result.Averaged,
		BlocksSetAside:    result.SetAside,
		SetAside:          result.Aside,
		BlockStarts:       starts,
		EffectiveAverages: result.Snapshot.EffectiveAverages,
		Verdict:           result.Verdict,
		AveragesNeeded:    result.Progress.AveragesNeeded,

		AveragesNeededRange: result.Progress.AveragesRange,
		Confidence:          confidence{e.Method.Level, e.Method.Simultaneous},
		ChanceLevel: chanceLevel{
			Probability: estimate.ChanceLevel, Multiple: estimate.Number(e.Chance.Multiple),
			Partial: estimate.Number(e.Chance.Partial), Force: estimate.Number(e.Chance.Force),
		},
		Resonances: append([]estimate.Resonance{}, result.Resonances.List...),
		Leakage:    leakageOf(result),
		Drift:      driftOf(r, result),
		DecayDB:    worstDecay(result),

		Gaps:       result.Gaps,
		Overranges: result.Overranges,
		Noise:      noise,
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

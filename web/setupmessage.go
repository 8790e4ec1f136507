package web

import (
	"cmp"
	"math"
	"slices"
	"strings"

	"shakerwatch/estimate"
	"shakerwatch/estimate/setup"
)

// setupStage is a stage as a page shows it.
type setupStage struct {
	Code  string `json:"code"`
	Name  string `json:"name"`
	State string `json:"state"` // "done", "now", "next", or "left-out" when the check ended before it
}

// setupMessage is s without its findings as a message.
func setupMessage(s SetupState) []byte {
	stages := []setupStage{}
	for _, stage := range setup.Stages() {
		state := "next"
		switch {
		case stage == s.Stage && !s.Ended:
			state = "now"
		case slices.Contains(s.Done, stage):
			state = "done"
		case s.Ended:
			state = "left-out"
		}
		stages = append(stages, setupStage{stage.String(), stage.Name(), state})
	}
	do, beware := instruction(s.Stage)
	return mustMarshal(struct {
		Type    string          `json:"type"` // "setup"
		Stages  []setupStage    `json:"stages"`
		Stage   string          `json:"stage"`  // code
		Do      string          `json:"do"`     // what a person is to do for it
		Beware  string          `json:"beware"` // what to beware of; can be empty
		Waiting bool            `json:"waiting"`
		Part    estimate.Number `json:"part"` // 0 to 1
		Worst   string          `json:"worst"`
		Summary string          `json:"summary"` // empty until the end
		Ended   bool            `json:"ended"`
	}{"setup", stages, s.Stage.String(), do, beware, s.Waiting, estimate.Number(s.Part), worst(s.Findings), s.Summary, s.Ended})
}

// instruction parts the first sentence, what to do, from what to beware of.
func instruction(stage setup.Stage) (do, beware string) {
	do, beware, parted := strings.Cut(stage.Instruction(), ". ")
	if parted {
		do += "."
	}
	return do, beware
}

// mark is the word by which a page marks a finding: its severity, but "unknown" and "fine" for those
// that setup.Summary counts as unknown and in order.
func mark(f setup.Finding) string {
	switch {
	case f.Severity != setup.Info:
		return f.Severity.String()
	case math.IsNaN(float64(f.Number)):
		return "unknown"
	}
	return "fine"
}

// marks are the words, worst first.
var marks = []string{"stop", "look", "unknown", "fine"}

func rank(f setup.Finding) int { return slices.Index(marks, mark(f)) }

// worst is the mark of the worst finding, empty without.
func worst(findings []setup.Finding) string {
	if len(findings) == 0 {
		return ""
	}
	return mark(slices.MinFunc(findings, func(a, b setup.Finding) int { return cmp.Compare(rank(a), rank(b)) }))
}

// A wireFinding is a finding as a page reads it.
type wireFinding struct {
	Mark     string               `json:"mark"`
	Stage    setup.Stage          `json:"stage"`
	Channels []string             `json:"channels"`
	Number   estimate.Number      `json:"number"`
	Unit     string               `json:"unit"`
	BandsHz  [][2]estimate.Number `json:"bands_hz"`
	Text     string               `json:"text"` // without the channels' names at its head
}

// findingsMessage is the findings as a message, worst first, else in the order given.
func findingsMessage(findings []setup.Finding) []byte {
	list := []wireFinding{}
	for _, f := range slices.SortedStableFunc(slices.Values(findings), func(a, b setup.Finding) int { return cmp.Compare(rank(a), rank(b)) }) {
		channels := append([]string{}, f.Channels...)
		bands := [][2]estimate.Number{}
		for _, band := range f.BandsHz {
			bands = append(bands, [2]estimate.Number{estimate.Number(band[0]), estimate.Number(band[1])})
		}
		text := strings.TrimPrefix(f.Text, strings.Join(channels, ", ")+": ")
		list = append(list, wireFinding{mark(f), f.Stage, channels, f.Number, f.Unit, bands, text})
	}
	return mustMarshal(struct {
		Type     string        `json:"type"` // "findings"
		Findings []wireFinding `json:"findings"`
	}{"findings", list})
}

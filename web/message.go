package web

import (
	"encoding/json"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
)

// The messages to a page, by their "type":
//
//	describe  once, first: a description
//	refresh   status, the view shown and its curves; the plots' files name them
//	access    whether this page may have the run do anything; browser.go
//	levels    the channel levels
//	held      the highest peaks since they were reset; held.go
//	marks     what stands against channels, and responses with little coherence; markings.go
//	events    events behind those that the page has; eventlog.go
//	acknowledged  the numbers of events that a person has seen; acknowledged.go
//	asked     the newest command of any page; command.go
//	broken    what is broken on a simulated rig; command.go
//	refused   why something that this page asked is not done
//	alive     in answer to the same
//	setup     how far a setup check is, in place of refresh; setupmessage.go
//	findings  of the setup check, so far
//	run       whether the run is finishing or has ended
//
// A number that cannot be had is null.

// A description is what a page must know before numbers come.
type description struct {
	Type       string          `json:"type"` // "describe"
	Run        string          `json:"run"`  // tells this run from any other
	Title      string          `json:"title"`
	Kind       string          `json:"kind"`  // of source
	Saves      bool            `json:"saves"` // whether results are saved when the run ends
	Channels   []channel       `json:"channels"`
	Forces     int             `json:"forces"` // how many of the channels, from the first on
	Pairs      [][2]int        `json:"pairs"`  // of forces, whose reciprocity can be judged
	Lines      int             `json:"lines"`
	SpacingHz  estimate.Number `json:"spacing_hz"`
	BlockS     estimate.Number `json:"block_s"` // seconds of a block
	HopS       estimate.Number `json:"hop_s"`   // seconds from block to block; null for burst and periodic
	Window     string          `json:"window"`
	Overlap    float64         `json:"overlap"`
	Excitation string          `json:"excitation"`
	Estimator  string          `json:"estimator"`
	Settling   int             `json:"settling"` // averages from which results are judged
	Target     target          `json:"target"`
	Shown      int             `json:"shown"` // how many responses can be chosen at once
	Plots      []plot          `json:"plots"`
	Points     []point         `json:"points"` // where points of the structure are; can be none
	Fixed      bool            `json:"fixed"`  // the blocks are given: no pausing, no starting over
	Faults     []Fault         `json:"faults"` // what can be broken, of a simulated rig
}

// A point is a place of the structure.
type point struct {
	Name string     `json:"name"`
	AtM  [3]float64 `json:"at_m"`
}

type channel struct {
	Name  string `json:"name"`
	Point string `json:"point"`
	Axis  string `json:"axis"`
	Unit  string `json:"unit"` // of the results
	Kind  string `json:"kind"` // "force" or "response"
}

type target struct {
	RandomError float64         `json:"random_error"` // relative standard deviation of |H|
	Share       float64         `json:"share"`
	DepthDB     float64         `json:"depth_db"`
	FirstHz     estimate.Number `json:"first_hz"` // the band in which it is judged
	LastHz      estimate.Number `json:"last_hz"`
}

func describe(run Run, id string, pairs [][2]int) description {
	r := run.Rig
	t := estimate.NewTarget(r)
	g, spacing := r.Grid, r.Grid.SpacingHz
	return description{
		Type:       "describe",
		Run:        id,
		Title:      r.Title,
		Kind:       run.Kind,
		Saves:      run.Saves,
		Channels:   channels(r),
		Forces:     len(r.Forces),
		Pairs:      pairs,
		Lines:      g.Lines,
		SpacingHz:  estimate.Number(spacing),
		BlockS:     estimate.Number(float64(g.Block) / g.RateHz),
		HopS:       orUnknown(float64(g.Hop) / g.RateHz),
		Window:     r.Analysis.Window,
		Overlap:    r.Analysis.Overlap,
		Excitation: r.Analysis.Excitation,
		Estimator:  r.Analysis.Estimator,
		Settling:   t.Settling,
		Target: target{
			RandomError: t.RandomError, Share: t.Share, DepthDB: t.DepthDB,
			FirstHz: estimate.Number(float64(t.First) * spacing),
			LastHz:  estimate.Number(float64(t.Last) * spacing),
		},
		Shown:  maxShown,
		Plots:  plots(r, t, run.Level),
		Points: points(r),
		Fixed:  run.Fixed,
		Faults: faults(run.Faults),
	}
}

func channels(r *rig.Rig) []channel {
	list := []channel{}
	for _, c := range r.Forces {
		list = append(list, channel{c.Name, c.Point, c.Axis, "N", "force"})
	}
	for _, c := range r.Responses {
		list = append(list, channel{c.Name, c.Point, c.Axis, "m/s²", "response"})
	}
	return list
}

func points(r *rig.Rig) []point {
	list := []point{}
	for _, p := range r.Points {
		list = append(list, point{p.Name, [3]float64{p.X, p.Y, p.Z}})
	}
	return list
}

// faults is the list without nil slices.
func faults(given []Fault) []Fault {
	list := []Fault{}
	for _, f := range given {
		f.Targets = append([]string{}, f.Targets...)
		list = append(list, f)
	}
	return list
}

// levelsMessage is l as a message.
func levelsMessage(l Levels) []byte {
	text := appendTime([]byte(`{"type":"levels","time_s":`), l.TimeS)
	text = appendNumber(append(text, `,"block":`...), l.Block)
	text = appendNumbers(append(text, `,"rms":`...), len(l.RMS), func(i int) float64 { return l.RMS[i] })
	text = appendNumbers(append(text, `,"peak":`...), len(l.Peak), func(i int) float64 { return l.Peak[i] })
	return append(text, '}')
}

// runMessage says whether the run is finishing and, once it has ended, how.
func runMessage(finishing bool, ended *string) []byte {
	return mustMarshal(struct {
		Type      string  `json:"type"`
		Finishing bool    `json:"finishing"`
		Ended     *string `json:"ended"` // null while the run goes on
	}{"run", finishing, ended})
}

// names turns indices into the words of a rig.
type names struct {
	forces, responses []string
	pairs             [][2]int
}

func newNames(r *rig.Rig, pairs [][2]int) names {
	n := names{pairs: pairs}
	for _, c := range r.Forces {
		n.forces = append(n.forces, c.Name)
	}
	for _, c := range r.Responses {
		n.responses = append(n.responses, c.Name)
	}
	return n
}

// frf names the frequency response from a force to a response.
func (n names) frf(response, force int) string {
	return n.responses[response] + "/" + n.forces[force]
}

// status is st as a page reads it.
func (n names) status(st Status) json.RawMessage {
	worst := ""
	if st.Progress != nil {
		worst = n.frf(st.Progress.Worst/len(n.forces), st.Progress.Worst%len(n.forces))
	}
	return mustMarshal(struct {
		TimeS      estimate.Number  `json:"time_s"`
		Seen       int64            `json:"seen"`
		Averaged   int64            `json:"averaged"`
		SetAside   int64            `json:"set_aside"`
		Effective  estimate.Number  `json:"effective"`
		Needed     estimate.Number  `json:"needed"`
		NeededLow  estimate.Number  `json:"needed_low"`
		NeededHigh estimate.Number  `json:"needed_high"`
		ToGoS      estimate.Number  `json:"to_go_s"`
		Verdict    estimate.Verdict `json:"verdict"`
		Paused     bool             `json:"paused"`
		Worst      string           `json:"worst"`       // frequency response; empty when unknown
		WorstError estimate.Number  `json:"worst_error"` // its error
		Gaps       int64            `json:"gaps"`
		Overranges int64            `json:"overranges"`
		Overloads  int64            `json:"overloads"`
	}{
		estimate.Number(st.TimeS), st.Seen, st.Averaged, st.SetAside,
		estimate.Number(st.EffectiveAverages), st.AveragesNeeded, st.NeededLow, st.NeededHigh, st.TimeToGoS, st.Verdict, st.Paused,
		worst, estimate.Number(st.worstError()), st.Gaps, st.Overranges, st.Overloads,
	})
}

package web

import (
	"encoding/json"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
)

// The messages to a page, by their "type":
//
//	describe  once, first: a description
//	refresh   status, the view shown and its curves; curver.go names them, results.go adds the rest
//	levels    the channel levels
//	events    events behind those that the page has; eventlog.go
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

func describe(r *rig.Rig, kind, run string, saves bool, pairs [][2]int) description {
	t := estimate.NewTarget(r)
	g, spacing := r.Grid, r.Grid.SpacingHz
	return description{
		Type:       "describe",
		Run:        run,
		Title:      r.Title,
		Kind:       kind,
		Saves:      saves,
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
		Settling:   estimate.SettlingAverages(len(r.Forces)),
		Target: target{
			RandomError: t.RandomError, Share: t.Share, DepthDB: t.DepthDB,
			FirstHz: estimate.Number(float64(t.First) * spacing),
			LastHz:  estimate.Number(float64(t.Last) * spacing),
		},
		Shown: maxShown,
		Plots: plots(r, t),
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

// view is v as a page reads it, with the names of its curves.
func (n names) view(v view) json.RawMessage {
	g := v.grid()
	shown := v.shown[:v.shownCount()]
	curves := map[string][]string{
		"response.size":   {n.frf(v.response, v.force)},
		"coherence.shown": {},
	}
	for _, o := range shown {
		curves["coherence.shown"] = append(curves["coherence.shown"], n.responses[o])
	}
	if len(n.pairs) > 0 {
		a, b := n.forces[n.pairs[v.pair][0]], n.forces[n.pairs[v.pair][1]]
		curves["reciprocity.ab"] = []string{"at " + a + " from " + b}
		curves["reciprocity.ba"] = []string{"at " + b + " from " + a}
	}
	return mustMarshal(struct {
		Response  int                 `json:"response"`
		Force     int                 `json:"force"`
		Pair      int                 `json:"pair"`
		Coherence []int               `json:"coherence"`
		First     int                 `json:"first"` // line
		Last      int                 `json:"last"`  // line
		Step      int                 `json:"step"`  // lines to a point, see grid
		Names     map[string][]string `json:"names"`
	}{v.response, v.force, v.pair, shown, g.first, g.last, g.step, curves})
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
		ToGoS      estimate.Number  `json:"to_go_s"`
		Verdict    estimate.Verdict `json:"verdict"`
		Worst      string           `json:"worst"`       // frequency response; empty when unknown
		WorstError estimate.Number  `json:"worst_error"` // its error
		Gaps       int64            `json:"gaps"`
		Overranges int64            `json:"overranges"`
		Overloads  int64            `json:"overloads"`
	}{
		estimate.Number(st.TimeS), st.Seen, st.Averaged, st.SetAside,
		estimate.Number(st.EffectiveAverages), st.AveragesNeeded, st.TimeToGoS, st.Verdict,
		worst, estimate.Number(st.worstError()), st.Gaps, st.Overranges, st.Overloads,
	})
}

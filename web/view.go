package web

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"slices"

	"shakerwatch/spectra"
)

// maxShown is how many chosen responses one plot shows together: more curves than that cannot be told
// apart.
const maxShown = 6

// minLines is the narrowest band that can be looked at.
const minLines = 8

// A view is what one page shows besides what all pages show: which frequency response, which
// responses' coherence, which reciprocity pair, which band and how finely, and which parts at all.
type view struct {
	response, force int
	pair            int
	shown           [maxShown]int // responses; -1 is none
	first, last     int           // lines
	points          int           // of a curve at most, leastPoints to shape.mostPoints
	log             bool          // frequencies at equal ratios are equally far apart
	parts           parts         // what is sent
}

// parts are a set of a shape's parts, a bit for each.
type parts uint32

// ranking is the part that is no plot: the responses' errors, for a list of the worst.
const ranking = "ranking"

// A shape bounds what can be chosen.
type shape struct {
	lines, responses, forces int
	pairs                    [][2]int // of forces, see pairs
	spacingHz                float64
	parts                    []string // names: of the plots, and ranking
	response                 int      // that a page shows which has chosen none
}

// mostNumbers is how many numbers a message has at most: some 100 kB.
const mostNumbers = 22_000

// mostPoints is how many points a curve can have, the fewer the more curves there are.
func (s shape) mostPoints() int {
	curves := 4*s.forces + 16 // all at once, with some to spare for the map
	return min(max(mostNumbers/curves, leastPoints), mostPoints)
}

// spectra is the shape as the estimates have it.
func (s shape) spectra() spectra.Shape {
	return spectra.Shape{Lines: s.lines, Forces: s.forces, Responses: s.responses}
}

// whole is the view of a page that has chosen nothing: everything, over all lines.
func (s shape) whole() view {
	v := view{response: s.response, last: s.lines - 1, points: s.mostPoints(), parts: s.allParts()}
	for i := range v.shown {
		v.shown[i] = -1
	}
	return v
}

func (s shape) allParts() parts { return 1<<len(s.parts) - 1 }

// has tells whether the view shows the part with that index.
func (v view) has(part int) bool { return v.parts>>part&1 == 1 }

// band sets the view's lines to those that reach from fromHz to toHz, widened to minLines where the
// spectrum has so many.
func (s shape) band(v *view, fromHz, toHz float64) {
	end := float64(s.lines - 1)
	v.first = int(math.Floor(min(max(fromHz/s.spacingHz, 0), end)))
	v.last = int(math.Ceil(min(max(toHz/s.spacingHz, 0), end)))
	if v.last-v.first+1 < minLines {
		v.first = max(0, min(v.first, s.lines-minLines))
		v.last = min(v.first+minLines-1, s.lines-1)
	}
}

// span is what the view's curves are spread over. On a scale of ratios 0 Hz has no place.
func (v view) span() span {
	log := v.log && v.last > 0
	first := v.first
	if log {
		first = max(first, 1)
	}
	return span{first, v.last, v.points, log}
}

// shownCount is the number of chosen responses.
func (v view) shownCount() int {
	n := 0
	for n < maxShown && v.shown[n] >= 0 {
		n++
	}
	return n
}

// A wireView is the part of a request that says what a page wants to see.
type wireView struct {
	Response  *int     `json:"response"`  // index; null: the one that is shown first
	Force     int      `json:"force"`     // index
	Pair      int      `json:"pair"`      // index, ignored without pairs
	Coherence []int    `json:"coherence"` // responses whose coherence is shown, at most maxShown
	FromHz    *float64 `json:"from_hz"`   // null: from the bottom
	ToHz      *float64 `json:"to_hz"`     // null: to the top
	Log       bool     `json:"log"`       // equal ratios of frequency are equally far apart
	Points    *int     `json:"points"`    // that a plot of this page can show; null: the most
	Parts     []string `json:"parts"`     // that the page shows; null: all
}

func (w *wireView) view(s shape) (view, error) {
	v := s.whole()
	if w.Response != nil {
		v.response = *w.Response
	}
	v.force, v.pair, v.log = w.Force, w.Pair, w.Log
	if len(s.pairs) == 0 {
		v.pair = 0
	}
	err := errors.Join(
		within("response", v.response, s.responses),
		within("force", v.force, s.forces),
		within("pair", v.pair, max(len(s.pairs), 1)),
	)
	if len(w.Coherence) > maxShown {
		return view{}, fmt.Errorf("message from a page: %d responses to show: at most %d", len(w.Coherence), maxShown)
	}
	for i, o := range w.Coherence {
		v.shown[i] = o
		err = errors.Join(err, within("coherence", o, s.responses))
	}
	if w.Points != nil {
		v.points = s.roundPoints(*w.Points)
	}
	if w.Parts != nil {
		var unknown error
		v.parts, unknown = s.choose(w.Parts)
		err = errors.Join(err, unknown)
	}
	fromHz, toHz := 0.0, math.MaxFloat64
	if w.FromHz != nil {
		fromHz = *w.FromHz
	}
	if w.ToHz != nil {
		toHz = *w.ToHz
	}
	s.band(&v, fromHz, toHz)
	return v, err
}

// roundPoints rounds up to hundreds, so that pages of nearly the same size share their messages.
func (s shape) roundPoints(n int) int {
	n = (min(max(n, leastPoints), mostPoints) + pointsStep - 1) / pointsStep * pointsStep
	return min(n, s.mostPoints())
}

// choose is the set of the named parts.
func (s shape) choose(names []string) (parts, error) {
	var set parts
	for _, name := range names {
		i := slices.Index(s.parts, name)
		if i < 0 {
			return 0, fmt.Errorf("message from a page: unknown part %.20q", name)
		}
		set |= 1 << i
	}
	return set, nil
}

// view is v, drawn on g, as a page reads it, with the names of its curves.
func (n names) view(v view, g grid, s shape) json.RawMessage {
	shown := v.shown[:v.shownCount()]
	curves := map[string][]string{
		"response.size":       {n.frf(v.response, v.force)},
		"coherence.partial":   {"partial, " + n.frf(v.response, v.force)},
		"distortion.response": {n.responses[v.response]},
		"distortion.force":    {n.forces[v.force]},
		"coherence.shown":     {},
	}
	for _, o := range shown {
		curves["coherence.shown"] = append(curves["coherence.shown"], n.responses[o])
	}
	if len(n.pairs) > 0 {
		a, b := n.forces[n.pairs[v.pair][0]], n.forces[n.pairs[v.pair][1]]
		curves["reciprocity.ab"] = []string{"at " + a + " from " + b}
		curves["reciprocity.ba"] = []string{"at " + b + " from " + a}
	}
	sent := []string{}
	for i, name := range s.parts {
		if v.has(i) {
			sent = append(sent, name)
		}
	}
	return mustMarshal(struct {
		Response  int                 `json:"response"`
		Force     int                 `json:"force"`
		Pair      int                 `json:"pair"`
		Coherence []int               `json:"coherence"`
		First     int                 `json:"first"` // line
		Last      int                 `json:"last"`  // line
		Log       bool                `json:"log"`
		Runs      [][2]int            `json:"runs"` // points, lines to a point; see grid
		Parts     []string            `json:"parts"`
		Names     map[string][]string `json:"names"`
	}{v.response, v.force, v.pair, shown, g.first, g.last, g.log, g.runs(), sent, curves})
}

package web

import (
	"bytes"
	"encoding/json"
	"math"
	"slices"
	"strconv"
	"sync"
	"sync/atomic"

	"shakerwatch/estimate"
)

// results are the newest status and estimates, and the messages made of them: one for each view that a
// page has, made when the first page with that view is ready for it.
//
// All methods may be called from several goroutines.
type results struct {
	names names
	shape shape
	plots []plot

	number atomic.Int64 // of the newest refresh, 0 without

	// making lets one message be made at a time, and guards what that needs.
	making sync.Mutex
	made   int64 // the refresh of which all below is
	curver curver
	common map[sharedPart][]byte
	views  map[view][]byte // whole messages
	size   int             // of the last message made, for the next one's memory

	// current guards the newest refresh. While a message is made it is held for reading, so set waits
	// for at most one message: a waiting writer goes before new readers.
	current sync.RWMutex
	status  []byte
	e       *estimate.Estimates // nil without
	spectra []float64           // (L,q) diagonal of Gxx, N²/Hz
	errors  []float64           // (p) of each response's frequency response that is furthest from the target
	scatter *scatter            // nil but with periodic excitation
	history history
	ahead   []historyPoint // projection
	target  float64        // relative standard deviation of |H|
}

// A sharedPart is what all views with that span show of a plot.
type sharedPart struct {
	span
	plot int // index
}

// ready fits r, which is new, out for a run with the given plots.
func (r *results) ready(n names, s shape, plots []plot, target estimate.Target) {
	r.names, r.shape, r.plots, r.target = n, s, plots, target.RandomError
	r.common, r.views = make(map[sharedPart][]byte), make(map[view][]byte)
	r.spectra, r.errors = make([]float64, s.lines*s.forces), make([]float64, s.responses)
	r.curver = curver{
		worst: make([]float64, s.lines), tenth: make([]float64, s.lines), worstOf: make([]int, s.lines),
		values: make([]float64, s.responses), spectra: r.spectra, errors: r.errors,
	}
}

// set makes st and e the newest and returns the estimates that it no longer holds. With e nil the
// estimates stay.
func (r *results) set(st Status, e *estimate.Estimates) (spare *estimate.Estimates) {
	text := r.names.status(st)
	r.current.Lock()
	defer r.current.Unlock()
	r.status = text
	if e != nil {
		r.keepSpectra(st.Gxx, e)
		r.keepErrors(st.Progress, e.Forces)
		r.scatter.keep(st)
		r.history.add(e.Averages, st.worstError())
		r.ahead = r.history.projection(r.ahead[:0], e.EffectiveAverages, e.Forces, st.AveragesNeeded)
		r.e, spare = e, r.e
	}
	r.number.Add(1)
	return spare
}

// keepSpectra copies the diagonal of gxx.
func (r *results) keepSpectra(gxx []complex128, e *estimate.Estimates) {
	q := e.Forces
	if gxx != nil && len(gxx) != e.Lines*q*q {
		panic("web: Gxx has another shape than the estimates")
	}
	for n := range r.spectra {
		r.spectra[n] = math.NaN()
		if gxx != nil {
			line, i := n/q, n%q
			r.spectra[n] = real(gxx[(line*q+i)*q+i])
		}
	}
}

// keepErrors copies each response's largest error; an unknown one is larger than any.
func (r *results) keepErrors(p *estimate.Progress, q int) {
	for o := range r.errors {
		r.errors[o] = math.NaN()
		if p == nil {
			continue
		}
		r.errors[o] = slices.Max(p.Errors[o*q : (o+1)*q]) // NaN where there is one
	}
}

// message returns the newest refresh as v shows it, and its number; nil and 0 when there is none. The
// text is shared and read-only.
func (r *results) message(v view) (text []byte, number int64) {
	r.making.Lock()
	defer r.making.Unlock()
	r.current.RLock()
	defer r.current.RUnlock()
	number = r.number.Load()
	if number == 0 {
		return nil, 0
	}
	if r.made != number {
		r.startOver(number)
	}
	text, ok := r.views[v]
	if !ok {
		if len(r.views) >= maxBrowsers {
			clear(r.views) // a page that changes its mind all the time fills no memory
			clear(r.common)
		}
		text = r.make(v, number)
		r.views[v] = text
	}
	return text, number
}

func (r *results) startOver(number int64) {
	r.made = number
	clear(r.common)
	clear(r.views)
	if r.e != nil {
		r.curver.take(r.e)
	}
}

// make writes the message of one view.
func (r *results) make(v view, number int64) []byte {
	g := newGrid(v.span())
	text := make([]byte, 0, r.size+r.size/16)
	text = append(text, `{"type":"refresh","number":`...)
	text = strconv.AppendInt(text, number, 10)
	text = append(append(text, `,"status":`...), r.status...)
	text = append(append(text, `,"view":`...), r.names.view(v, g, r.shape)...)
	text = append(text, `,"curves":{`...)
	for i := range r.shape.parts {
		if v.has(i) {
			text = r.part(text, i, v, g)
		}
	}
	r.size = len(text)
	return append(bytes.TrimSuffix(text, []byte(",")), `}}`...) // every curve leaves a comma behind
}

// part writes one of the shape's parts.
func (r *results) part(text []byte, part int, v view, g grid) []byte {
	switch name := r.shape.parts[part]; {
	case name == "convergence":
		return r.convergence(text)
	case r.e == nil:
		return text
	case name == ranking:
		return r.curver.ranking(text)
	}
	p := r.plots[part]
	if p.common != nil {
		key := sharedPart{g.span, part}
		shared, ok := r.common[key]
		if !ok {
			shared = p.common(&r.curver, nil, g)
			r.common[key] = shared
		}
		text = append(text, shared...)
	}
	if p.chosen != nil {
		text = p.chosen(&r.curver, text, g, v)
	}
	return text
}

// convergence writes the curves over averages, as pairs of numbers, with a comma behind.
func (r *results) convergence(dst []byte) []byte {
	points := r.history.points
	dst = appendPoints(append(dst, `"convergence.error":`...), points)
	dst = appendPoints(append(dst, `,"convergence.projection":`...), r.ahead)
	dst = append(dst, `,"convergence.target":`...)
	if len(points) == 0 {
		return append(dst, `[],`...)
	}
	ends := []historyPoint{{points[0].averages, r.target}, {points[len(points)-1].averages, r.target}}
	if len(r.ahead) > 0 {
		ends[1].averages = r.ahead[len(r.ahead)-1].averages
	}
	return append(appendPoints(dst, ends), ',')
}

// appendPoints appends points as [averages, error in %].
func appendPoints(dst []byte, points []historyPoint) []byte {
	dst = append(dst, '[')
	for i, p := range points {
		if i > 0 {
			dst = append(dst, ',')
		}
		dst = appendNumber(append(dst, '['), p.averages)
		dst = appendNumber(append(dst, ','), 100*p.err)
		dst = append(dst, ']')
	}
	return append(dst, ']')
}

// mustMarshal is for values of this package that always have a JSON form.
func mustMarshal(v any) []byte {
	text, err := json.Marshal(v)
	if err != nil {
		panic("web: " + err.Error())
	}
	return text
}

package web

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"

	"shakerwatch/estimate/setup"
)

// What a page may ask.
const (
	selectView     = "select"  // show this view from now on
	sendEvents     = "events"  // send the events behind a number, and all later ones as they come
	finishAndEnd   = "finish"  // end the run or the setup check and save its results
	startMeasuring = "measure" // of a setup check: the rig is as this stage wants it
)

// A request is what a page asks.
type request struct {
	kind  string
	view  view        // of selectView
	after int64       // of sendEvents
	stage setup.Stage // of startMeasuring
}

// wireRequest is a request as it comes. Fields that belong to another kind of request are ignored.
type wireRequest struct {
	Type      string   `json:"type"`
	Response  int      `json:"response"`  // index
	Force     int      `json:"force"`     // index
	Pair      int      `json:"pair"`      // index, ignored without pairs
	Coherence []int    `json:"coherence"` // responses whose coherence is shown, at most maxShown
	FromHz    *float64 `json:"from_hz"`   // null: from the bottom
	ToHz      *float64 `json:"to_hz"`     // null: to the top
	After     int64    `json:"after"`     // number of the last event that the page has
	Stage     string   `json:"stage"`     // code
}

// parseRequest reads one message of a page. The error says what is wrong with it.
func parseRequest(text []byte, s shape) (request, error) {
	var w wireRequest
	decoder := json.NewDecoder(bytes.NewReader(text))
	decoder.DisallowUnknownFields()
	if err := decoder.Decode(&w); err != nil {
		return request{}, fmt.Errorf("message from a page: %w", err)
	}
	if _, err := decoder.Token(); err != io.EOF {
		return request{}, errors.New("message from a page: more than one JSON value")
	}
	switch w.Type {
	case selectView:
		v, err := w.view(s)
		return request{kind: selectView, view: v}, err
	case sendEvents:
		return request{kind: sendEvents, after: max(w.After, 0)}, nil
	case finishAndEnd:
		return request{kind: finishAndEnd}, nil
	case startMeasuring:
		stage, err := w.stage()
		return request{kind: startMeasuring, stage: stage}, err
	}
	return request{}, fmt.Errorf("message from a page: unknown type %.20q", w.Type)
}

func (w *wireRequest) stage() (setup.Stage, error) {
	for _, stage := range setup.Stages() {
		if w.Stage == stage.String() {
			return stage, nil
		}
	}
	return 0, fmt.Errorf("message from a page: unknown stage %.20q", w.Stage)
}

func (w *wireRequest) view(s shape) (view, error) {
	v := view{response: w.Response, force: w.Force, pair: w.Pair}
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
	for i := range v.shown {
		v.shown[i] = -1
		if i < len(w.Coherence) {
			v.shown[i] = w.Coherence[i]
			err = errors.Join(err, within("coherence", v.shown[i], s.responses))
		}
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

func within(name string, index, n int) error {
	if index < 0 || index >= n {
		return fmt.Errorf("message from a page: %s %d of %d", name, index, n)
	}
	return nil
}

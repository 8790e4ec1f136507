package web

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"strings"
	"unicode"
	"unicode/utf8"

	"shakerwatch/estimate/setup"
)

// What a page may ask.
const (
	selectView     = "select"  // show this view from now on
	sendEvents     = "events"  // send the events behind a number, and all later ones as they come
	finishAndEnd   = "finish"  // end the run or the setup check and save its results
	startMeasuring = "measure" // of a setup check: the rig is as this stage wants it

	acknowledge = "acknowledge" // a person has seen this event, or all up to it
	resetPeaks  = "reset-peaks" // forget the held peak of this channel, or of all
	stillAlive  = "alive"       // say so too
	// Besides, the kinds of Command.
)

// maxNote is how long a note can be, in characters.
const maxNote = 300

// A refusal is an error that the person at the page is told; other errors say that the page and the
// program do not fit.
type refusal string

func (r refusal) Error() string { return string(r) }

// A request is what a page asks.
type request struct {
	kind  string
	view  view        // of selectView
	after int64       // of sendEvents
	stage setup.Stage // of startMeasuring

	event   int64 // of acknowledge: its number
	before  bool  // of acknowledge: and every one before it
	channel int   // of resetPeaks, negative for all
	command *Command
}

// controls tells whether r is more than looking.
func (r *request) controls() bool {
	switch r.kind {
	case selectView, sendEvents, stillAlive:
		return false
	}
	return true
}

// wireRequest is a request as it comes. Fields that belong to another kind of request are ignored.
type wireRequest struct {
	Type string `json:"type"`
	wireView
	After   int64  `json:"after"`   // number of the last event that the page has
	Stage   string `json:"stage"`   // code
	Event   int64  `json:"event"`   // number
	Before  bool   `json:"before"`  // and all before that event
	Channel *int   `json:"channel"` // index, forces first; null: all
	Text    string `json:"text"`    // of a note
	Fault   string `json:"fault"`   // code
	Target  string `json:"target"`  // of the fault
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
	case acknowledge:
		return request{kind: acknowledge, event: w.Event, before: w.Before}, nil
	case stillAlive:
		return request{kind: stillAlive}, nil
	case resetPeaks:
		if w.Channel == nil {
			return request{kind: resetPeaks, channel: -1}, nil
		}
		return request{kind: resetPeaks, channel: *w.Channel}, within("channel", *w.Channel, s.forces+s.responses)
	}
	if c, err := w.command(); c != nil || err != nil {
		return request{kind: w.Type, command: c}, err
	}
	return request{}, fmt.Errorf("message from a page: unknown type %.20q", w.Type)
}

// command is nil when w is none.
func (w *wireRequest) command() (*Command, error) {
	switch kind := CommandKind(w.Type); kind {
	case Pause, Resume, StartOver:
		return &Command{Kind: kind}, nil
	case Break, Mend:
		return &Command{Kind: kind, Fault: w.Fault, Target: w.Target}, nil
	case Note:
		text := strings.TrimSpace(w.Text)
		switch {
		case text == "":
			return nil, refusal("An empty note says nothing.")
		case utf8.RuneCountInString(text) > maxNote:
			return nil, refusal(fmt.Sprintf("A note has at most %d characters.", maxNote))
		case strings.ContainsFunc(text, func(r rune) bool { return !unicode.IsGraphic(r) }):
			return nil, refusal("The note has characters that cannot be seen. Leave them out.")
		}
		return &Command{Kind: Note, Text: text}, nil
	}
	return nil, nil
}

func (w *wireRequest) stage() (setup.Stage, error) {
	for _, stage := range setup.Stages() {
		if w.Stage == stage.String() {
			return stage, nil
		}
	}
	return 0, fmt.Errorf("message from a page: unknown stage %.20q", w.Stage)
}

func within(name string, index, n int) error {
	if index < 0 || index >= n {
		return fmt.Errorf("message from a page: %s %d of %d", name, index, n)
	}
	return nil
}

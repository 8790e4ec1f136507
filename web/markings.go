package web

import (
	"bytes"

	"shakerwatch/estimate"
)

const (
	// lowCoherence is the multiple coherence below which the forces explain less than half of a response.
	// Where that is so on more than half of the judged lines, nobody should trust the response; our own choice.
	lowCoherence = 0.5

	// coherentAgain takes its place once a response has the mark, so that the mark does not flicker.
	coherentAgain = 0.6
)

// markings are what is to be seen at each channel and point besides levels: what stands against it, and
// responses with little coherence.
type markings struct {
	first, last int // judged lines
	low         []bool
	known       []bool
	counts      []coherenceCount // scratch
	message     numbered
}

// coherenceCount is on how many judged lines a response's coherence is known, and below each bound.
type coherenceCount struct{ known, low, almost int }

func newMarkings(responses int, t estimate.Target) markings {
	return markings{
		first: t.First, last: t.Last,
		low: make([]bool, responses), known: make([]bool, responses),
		counts: make([]coherenceCount, responses),
	}
}

// judge looks at the coherence of each response.
func (m *markings) judge(e *estimate.Estimates) {
	clear(m.counts)
	for k := m.first; k <= m.last; k++ {
		for o, v := range e.MultipleCoherence[k*e.Responses:][:e.Responses] {
			if v != v { // unknown
				continue
			}
			c := &m.counts[o]
			c.known++
			if v < coherentAgain {
				c.almost++
			}
			if v < lowCoherence {
				c.low++
			}
		}
	}
	for o, c := range m.counts {
		m.known[o] = c.known > 0
		m.low[o] = 2*c.low > c.known || m.low[o] && 2*c.almost > c.known
	}
}

// write makes the message, for pages only when it says anything new.
func (m *markings) write(s standing) {
	type wire struct {
		Kind     string               `json:"kind"`
		Cause    string               `json:"cause"`    // empty for kinds without causes
		Channels []string             `json:"channels"` // empty when it is about none in particular
		BandsHz  [][2]estimate.Number `json:"bands_hz"` // empty when it is broadband
	}
	stands := []wire{}
	for _, e := range s.events {
		stands = append(stands, wire{string(e.kind), string(e.cause), append([]string{}, e.channels...), e.bandsHz})
	}
	indices := func(of []bool) []int {
		list := []int{}
		for i, is := range of {
			if is {
				list = append(list, i)
			}
		}
		return list
	}
	text := mustMarshal(struct {
		Type  string `json:"type"` // "marks"
		Stand []wire `json:"standing"`
		Low   []int  `json:"low_coherence"` // responses
		Known []int  `json:"known"`         // responses whose coherence is known
	}{"marks", stands, indices(m.low), indices(m.known)})
	if !bytes.Equal(text, m.message.text) {
		m.message.set(text)
	}
}

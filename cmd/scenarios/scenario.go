package main

import "fmt"

// What a fault of a scenario is put on.
type on int

const (
	nothing on = iota
	aForce
	everyForce
	someForces    // two
	aResponse     // any
	twoResponses  //
	aDrivingPoint // the response at a force
	aPlace        // any response's
	aMode         // in the band, that shows
	anotherForce  // than those of the faults before
	otherResponse
)

// A fault of a scenario. It comes so many blocks after the scenario's onset.
type fault struct {
	kind   string
	on     on
	later  [2]int  // from, to
	amount float64 // 0 is the usual one
}

// An aim is what a scenario's runs count for.
type aim int

const (
	reported   aim = iota // nothing: no aim was set, the figures are for the reader
	named                 // rightly named, in time
	reciprocal            // right cause of a reciprocity fault
	healthy               // no false event
)

// A scenario is a line of the table.
type scenario struct {
	name     string
	setting  setting
	aim      aim
	shakers  int        // at least; 0 is 1
	faults   []fault    // none is a healthy run
	start    bool       // the faults are there from the first frame on, and stay
	within   int64      // hops in which it must be named; 0 is by the setting
	brief    bool       // it is named when it is over
	averaged bool       // blocks that hold it are averaged: it is no fault of the kind that stops
	blocks   int64      // of a healthy run
	share    float64    // runs, per run asked for; 0 is 1
	turns    []scenario // each seed has one of these instead, in this setting
}

// of is the scenario that a seed has.
func (s *scenario) of(seed uint64) *scenario {
	if s.turns == nil {
		return s
	}
	turn := s.turns[seed%uint64(len(s.turns))]
	turn.setting = s.setting
	return &turn
}

// limit is within how many hops the first right event must come. Three suffice at 50 % overlap. Where more blocks hold one
// moment, as many blocks are half affected before a whole one is, and two of these must agree. What is brief is over when
// as many blocks, two at least, are calm behind those that hold it and the one in which it still rings.
func (s *scenario) limit() int64 {
	spans := int64(s.setting.spans())
	switch {
	case s.within > 0:
		return s.within
	case s.brief:
		return spans + max(2, spans) + 2
	}
	return max(3, spans+1)
}

// spans is how many blocks hold one moment.
func (s *setting) spans() int {
	if s.excitation != "" {
		return 1
	}
	return int(1/(1-s.overlap) + 0.999)
}

func (s *scenario) String() string { return fmt.Sprintf("%s, %s", s.name, s.setting.name) }

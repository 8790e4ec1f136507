// Package rig holds the rig file: which channel carries which force or response, and how it is to
// be analysed. Read reports every mistake of a file at once, each with its line.
//
// It knows TOML and the numbers that the file resolves to. It may not know where samples come from
// or what is computed from them.
package rig

import "slices"

// A Rig is a rig file that was read and found free of mistakes, with every default filled in.
// It is read-only once made.
type Rig struct {
	Path      string // of the file, as given
	Title     string
	Source    Source
	Analysis  Analysis
	Burst     Burst    // zero unless Analysis.Excitation is "burst"
	Periodic  Periodic // zero unless Analysis.Excitation is "periodic"
	Target    Target
	OnFault   string    // "hold" or "carry-on"
	Forces    []Channel // q, in file order, at least one
	Responses []Channel // p, in file order, at least one
	Points    []Point   // in file order; can be none, and need not hold the points of all channels
	Grid      Grid

	rateLine int      // of [source] rate in the file, for messages
	unused   []string // tables of another excitation than the one chosen
}

// Source says where the samples come from.
type Source struct {
	Kind       string  // "soundcard", "pipe" or "demo"
	Device     string  // sound device name or part of it; empty is the default input
	RateHz     float64 // frames per second
	FullScaleV float64 // volts at digital full scale
	LimitV     float64 // volts at which the chain clips
	Channels   int     // channels in the stream
}

// Analysis says what is to be computed.
type Analysis struct {
	MaxFrequencyHz float64
	MinFrequencyHz float64
	LineSpacingHz  float64 // wanted; Grid.SpacingHz is the true one; 0 where periodic leaves it out
	Window         string  // "hann", "rectangular" or "flattop"
	Overlap        float64 // 0 <= Overlap < 1
	Excitation     string  // "random", "burst" or "periodic"
	Averaging      string  // "linear" or "exponential"
	Memory         int     // blocks, with exponential averaging; else 0
	Estimator      string  // "h1", "h2" or "hv"
}

// Burst says how the blocks of burst random excitation are found: either by period or by trigger.
type Burst struct {
	PeriodS      float64 // 0 with a trigger
	TriggerForce string  // name of a force; empty with a period
	TriggerLevel float64 // share of the force's peak so far; 0 with a period
	PreTriggerS  float64 // the block starts this long before the trigger
}

// Periodic describes periodic random excitation.
type Periodic struct {
	Period        int // source frames
	SettlePeriods int // left out after each new random block
	KeepPeriods   int // kept right after them, at least 2
}

// Target says which random error is good enough.
type Target struct {
	RandomError float64 // relative standard deviation of |H|
	Share       float64 // of the lines of interest of every frequency response
	DepthDB     float64 // lines of interest are no more than this below the maximum of their |H|
}

// A Channel is one force or response.
type Channel struct {
	Index       int     // 0-based input channel; the file counts from 1
	Name        string  // unique in the rig
	Point       string  // of the structure
	Axis        string  // "+x" to "-z": the transducer's positive direction
	Unit        string  // "N"; "m/s^2" or "g"
	Sensitivity float64 // volts per unit, negative when the transducer is reversed on purpose
	FullScaleV  float64 // volts at digital full scale
	LimitV      float64 // volts at which the chain clips
	Line        int     // of the channel's number in the file, for messages
}

// Channels are the forces, then the responses: the order of everything that is computed.
func (r *Rig) Channels() []Channel { return slices.Concat(r.Forces, r.Responses) }

// StandardGravity is 1 g in m/s², exact by definition (3rd General Conference on Weights and
// Measures, 1901; ISO 80000-3).
const StandardGravity = 9.80665

// Scale is the factor from a digital sample to N or m/s².
func (c Channel) Scale() float64 {
	scale := c.FullScaleV / c.Sensitivity
	if c.Unit == "g" {
		scale *= StandardGravity
	}
	return scale
}

// Letter is the axis without its sign.
func (c Channel) Letter() string { return c.Axis[1:] }

// Sign is -1 or 1, the axis's.
func (c Channel) Sign() float64 {
	if c.Axis[0] == '-' {
		return -1
	}
	return 1
}

// BlockFrames is the number of source frames from the first to the last one of a block, of all
// periods that are kept with periodic excitation.
func (r *Rig) BlockFrames() int64 {
	return int64(r.Grid.Block) * int64(r.Grid.Decimation) * int64(max(r.Periodic.KeepPeriods, 1))
}

// Grid is what the analysis settings resolve to.
type Grid struct {
	Decimation int     // d: one analysis sample every d source frames
	RateHz     float64 // analysis samples per second
	Block      int     // analysis samples in a block
	Hop        int     // analysis samples from one block's start to the next; 0 for burst and periodic
	SpacingHz  float64 // true spacing of the spectral lines
	Lines      int     // from 0 Hz to the highest line not above max_frequency
}

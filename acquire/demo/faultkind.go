package demo

import "math"

// What a kind of fault befalls.
type target int

const (
	nothing     target = iota // no target
	oneOrMore                 // forces, or all
	anyChannel                // channels of either sort
	aResponse                 // responses
	twoForces                 // a force and those that follow it
	twoChannels               // a channel and the one whose signal it carries
	aPlace                    // a point and an axis letter, or a channel that stands there
	aMode                     // a frequency, or all
)

// words says what a target is to be.
func (t target) words() string {
	return [...]string{
		nothing:     "nothing",
		oneOrMore:   "forces, or all",
		anyChannel:  "channels",
		aResponse:   "responses",
		twoForces:   "two forces or more",
		twoChannels: "two channels",
		aPlace:      "a point with its axis letter, or a channel",
		aMode:       "a mode's frequency in Hz, or all",
	}[t]
}

// bounds are the least and the most names of a target.
func (t target) bounds() (least, most int) {
	switch t {
	case nothing:
		return 0, 0
	case twoForces:
		return 2, math.MaxInt
	case twoChannels:
		return 2, 2
	case aPlace, aMode:
		return 1, 1
	default:
		return 1, math.MaxInt
	}
}

// A faultKind is one row of the table of what can break.
type faultKind struct {
	name   string
	target target
	unit   string  // of the amount; empty where there is none
	usual  float64 // amount; a technician would call that a fault
	lo, hi float64 // bounds of the amount
	once   bool    // happens at its onset and has no end
	help   string
}

// faultKinds are all kinds. The usual amounts are our own choice, each so that a technician would
// stop the run when he knew.
var faultKinds = []faultKind{
	{"detach", oneOrMore, "kg", 0.02, 1e-4, 10, false,
		"the stinger is off between load cell and structure; the cell carries the amount of mass behind it"},
	{"unhook", oneOrMore, "kg", 0.03, 1e-4, 10, false,
		"the stinger is off between shaker and load cell; the cell hangs on the structure with the amount of mass"},
	{"pad-off", oneOrMore, "kg", 0.5, 1e-3, 100, false,
		"the cell's pad is off the structure; the shaker moves the amount of mass that hangs on the cell"},
	{"drive-off", oneOrMore, "", 0, 0, 0, false,
		"the shaker is not driven"},
	{"level", oneOrMore, "dB", -6, -120, 40, false,
		"the drive is turned by the amount"},
	{"tied", twoForces, "share of amplitude", 0.9, 0, 1, false,
		"the drives of the later ones repeat that of the first by the amount, in the whole band"},
	{"tied-band", twoForces, "Hz", 0, 0, 1e5, false,
		"the drives of the later ones repeat that of the first around the amount, by default 0.3 of max_frequency"},
	{"loose", anyChannel, "share", 0.4, 0, 1, false,
		"the sensor rattles and its gain flutters at random by the amount"},
	{"cut", anyChannel, "", 0, 0, 0, false,
		"the cable is broken; the channel carries the noise of its conditioner alone"},
	{"dead", anyChannel, "share of full scale", 0, -1, 1, false,
		"the channel is constant, by default 0"},
	{"gain", anyChannel, "factor", 1.5, 0, 1e6, false,
		"the channel's gain is wrong by the amount"},
	{"overrange", anyChannel, "factor", 100, 1, 1e6, false,
		"the channel's gain is so high that it clips"},
	{"reverse", anyChannel, "", 0, 0, 0, false,
		"the channel's polarity is reversed"},
	{"skew", anyChannel, "frames", 2, 0, maxSkewFrames, false,
		"the channel is late by the amount, to the next sub step of the simulation"},
	{"tilt", aResponse, "degrees", 25, -90, 90, false,
		"the sensor is turned from its axis towards the next one (x to y, y to z, z to x)"},
	{"twin", twoChannels, "", 0, 0, 0, false,
		"the first channel carries the signal of the second"},
	{"mode-shift", aMode, "%", -6, -50, 100, false,
		"the frequency of the mode nearest to the target moves by the amount"},
	{"mode-damping", aMode, "factor", 2, 0.01, 100, false,
		"the damping of the mode nearest to the target is multiplied by the amount"},
	{"knock", aPlace, "N s", 1, -1e3, 1e3, true,
		"a hammer's blow of the amount, 3 ms long"},
	{"lost", nothing, "frames", 256, 1, 1e9, false,
		"frames are lost: the amount, or all from onset to end"},
}

// maxSkewFrames is the most by which a channel can be late.
const maxSkewFrames = 64

// kindNamed returns the row of a name.
func kindNamed(name string) (k *faultKind, ok bool) {
	for i := range faultKinds {
		if faultKinds[i].name == name {
			return &faultKinds[i], true
		}
	}
	return nil, false
}

// A FaultKind describes a kind of fault to a person.
type FaultKind struct {
	Name   string
	Target string  // what stands behind the colon
	Unit   string  // of the amount; empty where there is none
	Usual  float64 // amount when none is given
	Help   string  // one line
}

// FaultKinds lists what can break. The caller owns the list.
func FaultKinds() []FaultKind {
	var list []FaultKind
	for _, k := range faultKinds {
		list = append(list, FaultKind{k.name, k.target.words(), k.unit, k.usual, k.help})
	}
	return list
}

package setup

import (
	"math"

	"shakerwatch/estimate"
)

// A Severity says how much a finding matters.
type Severity int

// The severities, the worst last.
const (
	Info Severity = iota // in order, or no more than unknown
	Look                 // somebody should look before the run
	Stop                 // the run would be worthless: mend it first
)

// String is "info", "look" or "stop".
func (s Severity) String() string { return [...]string{"info", "look", "stop"}[s] }

// MarshalText writes the word.
func (s Severity) MarshalText() ([]byte, error) { return []byte(s.String()), nil }

// A Kind is what a finding is about.
type Kind string

// The kinds. Those that an event of the watch has too bear its name.
const (
	NotMeasured     Kind = "not-measured"     // a stage is missing that others are compared with
	TooShort        Kind = "too-short"        // a stage has too few averages
	DeadChannel     Kind = "dead-channel"     // every sample is the same
	RailedChannel   Kind = "railed-channel"   // stuck at its limit
	Overrange       Kind = "overrange"        // reached its limit
	TwinChannels    Kind = "twin-channels"    // the same signal twice
	DCOffset        Kind = "dc-offset"        // mean voltage
	NoiseLevel      Kind = "noise-level"      // with the shakers off
	NoiseRise       Kind = "noise-rise"       // what the amplifiers add to it
	MainsHum        Kind = "mains-hum"        // lines at 50 or 60 Hz and harmonics
	NotDriven       Kind = "not-driven"       // a force with the shakers on is hardly more than its noise
	Headroom        Kind = "headroom"         // from the highest peak to the limit
	ForceDrop       Kind = "force-drop"       // where a force comes nearest to its noise
	PowerFlow       Kind = "power-flow"       // its sign at a driving point
	PolaritySuspect Kind = "polarity-suspect" // the same where it goes out of the structure
	SignalToNoise   Kind = "signal-to-noise"  // by octave
)

// A Finding is one thing that a setup check says.
type Finding struct {
	Stage    Stage           `json:"stage"` // in which it shows; the later one where two are compared
	Kind     Kind            `json:"kind"`
	Channels []string        `json:"channels"` // names, in rig order; never nil; empty when all are meant
	Number   estimate.Number `json:"number"`   // NaN when unknown
	Unit     string          `json:"unit"`     // of Number: "m/s²", "N", "V", "dB", "" and so on
	BandsHz  [][2]float64    `json:"bands_hz"` // where in frequency, lowest first; never nil; empty when broadband
	Severity Severity        `json:"severity"`
	Text     string          `json:"text"` // one line: channel, number with unit, what to do

	channels []int // in rig order, forces first
}

// first is the finding's place among findings of equal severity.
func (f Finding) first() int {
	if len(f.channels) == 0 {
		return -1
	}
	return f.channels[0]
}

// unknown is the number of a finding that could not be had.
var unknown = estimate.Number(math.NaN())

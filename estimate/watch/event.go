package watch

// An Edge says whether an event begins or ends.
type Edge string

// The edges.
const (
	Raised  Edge = "raised"
	Cleared Edge = "cleared"
)

// A Kind is what an event is about.
type Kind string

// The kinds that the watch raises. The operator's own (notes, pauses) are not its business.
const (
	Overrange        Kind = "overrange"
	Gap              Kind = "gap"
	DeadChannel      Kind = "dead-channel"
	TwinChannels     Kind = "twin-channels"
	NoDrive          Kind = "no-drive"
	ForceLost        Kind = "force-lost"
	ForceNotReaching Kind = "force-not-reaching"
	ResponseSuspect  Kind = "response-suspect"
	StructureChanged Kind = "structure-changed"
	LevelChanged     Kind = "level-changed"
	Disturbance      Kind = "disturbance"
	PolaritySuspect  Kind = "polarity-suspect"
	ReciprocityOff   Kind = "reciprocity-off"
	ForcesCorrelated Kind = "forces-correlated"
	LowSignal        Kind = "low-signal"
)

// A Cause says why, for the kinds that have causes.
type Cause string

// The causes: the first four of reciprocity-off, the last of forces-correlated.
const (
	CauseGain     Cause = "gain"
	CausePolarity Cause = "polarity"
	CauseSkew     Cause = "skew"
	CauseLocal    Cause = "local"
	CauseMains    Cause = "mains"
)

// An Event is one line of events.jsonl.
type Event struct {
	TimeS      float64      `json:"time_s"`      // source seconds at the end of Block
	Block      int64        `json:"block"`       // the one whose judgement raised or cleared it
	SinceBlock int64        `json:"since_block"` // the first block that holds it
	Edge       Edge         `json:"edge"`
	Kind       Kind         `json:"kind"`
	Channels   []string     `json:"channels"` // names of those accused; never nil
	BandsHz    [][2]float64 `json:"bands_hz"` // empty when broadband; never nil
	Text       string       `json:"text"`     // one sentence that a technician can act on
	Cause      Cause        `json:"cause,omitempty"`
}

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

// The kinds.
const (
	Overrange Kind = "overrange" // a channel in use reached its limit
	Gap       Kind = "gap"       // frames were lost
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
}

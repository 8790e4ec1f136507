package watch

// A finding is what a rule found in one block, or in one look at the average.
type finding struct {
	kind     Kind
	key      int // tells findings of one kind apart: a force, a response, a pair; 0 when there is one only
	channels []int
	about    []int // channels that it rests on and does not accuse
	bandsHz  [][2]float64
	cause    Cause
	value    float64 // what the sentence says in figures: dB, share, seconds; its meaning is the kind's
	detail   string  // words for the sentence that only the rule knows
	anew     bool    // it differs so much from what stands that it is said again
}

// A source is what a kind's rule looks at.
type source int

const (
	everyBlock  source = iota // what is known of every block, transformed or not
	transformed               // a transformed block
	armed                     // a transformed block beside the average
	average                   // the average, each time it was learnt anew
	recent                    // the last normal blocks
)

package estimate

import (
	"fmt"
	"math"
)

// diedOutDB is to where below its peak a burst must have fallen when its block ends. Common practice, no source.
const diedOutDB = -40

// stillDB is by how much what is left falls over the last quarter of a block, at least, to be taken for
// ringing. Noise stays within some tenths; ringing that falls less is of a mode not a sixth of a line wide.
const stillDB = 1

// A Decay is how the signals of burst excitation end, channel by channel.
type Decay struct {
	EndDB  []float64 // level at the end of blocks relative to the peak, NaN where it is unknown
	FallDB []float64 // by how much it falls over the last quarter of blocks
}

// Undecayed says in one sentence which channels of burst excitation still ring when their blocks end, above
// -40 dB of their peak, empty when none does.
func (d Decay) Undecayed(names []string) string {
	worst, count := math.Inf(-1), 0
	var name string
	for ch, db := range d.EndDB {
		if !(db > diedOutDB && d.FallDB[ch] > stillDB) {
			continue
		}
		count++
		if db > worst {
			worst, name = db, names[ch]
		}
	}
	if count == 0 {
		return ""
	}
	others := ""
	if count > 1 {
		others = fmt.Sprintf(", and %d more", count-1)
	}
	return fmt.Sprintf("%s has fallen by only %.0f dB when its blocks end%s: what still rings leaks: shorten the bursts, or choose a smaller line_spacing",
		name, math.Abs(worst), others)
}

package estimate

import (
	"fmt"
	"math"
)

// diedOutDB is to where below its peak a burst must have fallen when its block ends. Common practice, no source.
const diedOutDB = -40

// Undecayed says in one sentence which channels of burst excitation have not died out when their blocks
// end, empty when all have. decayDB holds, channel by channel, the level at the end of blocks relative to the
// peak in dB, NaN where it is unknown.
func Undecayed(decayDB []float64, names []string) string {
	worst, count := math.Inf(-1), 0
	var name string
	for ch, db := range decayDB {
		if !(db > diedOutDB) {
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
	return fmt.Sprintf("%s has fallen by only %.0f dB when its blocks end%s: what is left leaks, unless it is noise: shorten the bursts, or choose a smaller line_spacing",
		name, math.Abs(worst), others)
}

package setup

import (
	"fmt"
	"strings"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// maxNamed is how many channels a sentence names; a person looks at the first ones first.
const maxNamed = 4

// LowSignal says in one sentence which channels of s are within 10 dB of their noise with the
// amplifiers on, and in which octaves; it is empty when none is, and while s has too few averages
// to tell. n must fit r, see Check, and it panics when s has another shape than r.
func (n *Noise) LowSignal(r *rig.Rig, s *spectra.Snapshot) string {
	if s.Averages < estimate.SettlingAverages(s.Forces) {
		return ""
	}
	target := estimate.NewTarget(r)
	bands := octaves(target.First, target.Last, r.Grid.SpacingHz)
	var low []string
	more := 0
	for ch, channel := range r.Channels() {
		weak := n.weakBands(s, ch, bands)
		switch {
		case weak == nil:
		case len(low) == maxNamed:
			more++
		default:
			low = append(low, fmt.Sprintf("%s (%s)", channel.Name, strings.Join(weak, ", ")))
		}
	}
	if low == nil {
		return ""
	}
	text := fmt.Sprintf("less than %d dB above the noise: %s", lowSignalDB, strings.Join(low, ", "))
	if more > 0 {
		text += fmt.Sprintf(" and %d more", more)
	}
	return text
}

// weakBands are the bands in which channel ch, forces first, is too near to its noise.
func (n *Noise) weakBands(s *spectra.Snapshot, ch int, bands []band) []string {
	var weak []string
	for _, b := range bands {
		var power, noise float64
		for k := b.first; k <= b.last; k++ {
			power += density(s, ch, k)
			noise += n.density(s.Shape, ch, k)
		}
		if powerDB(power, noise) < lowSignalDB {
			weak = append(weak, b.String())
		}
	}
	return weak
}

// density is the noise of channel ch, forces first, at line k.
func (n *Noise) density(s spectra.Shape, ch, k int) float64 {
	if ch < s.Forces {
		return n.Force[k*s.Forces+ch]
	}
	return n.Response[k*s.Responses+ch-s.Forces]
}

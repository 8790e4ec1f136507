package setup

import (
	"fmt"
	"math"
	"slices"

	"shakerwatch/estimate"
)

// twinChannels reports channels with the same samples in any stage, and pairs that are the same but
// for a gain and a little noise with the shakers on. With the shakers off the latter would accuse
// channels that have nothing but the same hum.
func twinChannels(c *check) []Finding {
	var found []Finding
	same := map[[2]int]bool{}
	for s := Stage(stages - 1); s >= 0; s-- {
		if c.tally(s) == nil {
			continue
		}
		for _, group := range c.tally(s).Identical() {
			if !enter(same, group) {
				continue
			}
			found = append(found, Finding{
				Stage: s, Severity: Stop, Number: 0, Unit: "V", channels: group,
				Text: fmt.Sprintf("differ by 0 V in every sample with the %s: give each its own input, and look at the channel numbers", s.Name()),
			})
		}
	}
	if c.tally(Low) == nil {
		return found
	}
	for _, twin := range c.tally(Low).Twins() {
		if !same[[2]int{twin.A, twin.B}] && c.usable(twin.A, Low) && c.usable(twin.B, Low) {
			found = append(found, nearTwins(twin))
		}
	}
	slices.SortStableFunc(found, func(a, b Finding) int { return slices.Compare(a.channels, b.channels) })
	return found
}

// enter puts all pairs of a group into same and tells whether one of them is new.
func enter(same map[[2]int]bool, group []int) (news bool) {
	for i, b := range group {
		for _, a := range group[:i] {
			pair := [2]int{a, b}
			news = news || !same[pair]
			same[pair] = true
		}
	}
	return news
}

func nearTwins(t Twin) Finding {
	sign := ""
	if t.Opposite {
		sign = " with opposite sign"
	}
	return Finding{
		Stage: Low, Severity: Look, Number: estimate.Number(t.ResidualDB), Unit: "dB", channels: []int{t.A, t.B},
		Text: fmt.Sprintf("carry the same signal%s down to %.1f dB with the shakers on: look for one cable on two inputs; "+
			"two sensors on one stiff part can look alike", sign, math.Abs(t.ResidualDB)),
	}
}

package monitor

import "shakerwatch/acquire/rig"

// channelsInUse are the indices of the rig's channels in the stream.
func channelsInUse(r *rig.Rig) []int {
	var indices []int
	for _, ch := range r.Channels() {
		indices = append(indices, ch.Index)
	}
	return indices
}

func names(r *rig.Rig) []string {
	var names []string
	for _, ch := range r.Channels() {
		names = append(names, ch.Name)
	}
	return names
}

// frfName names frequency response n of (p,q).
func frfName(r *rig.Rig, n int) string {
	q := len(r.Forces)
	return r.Responses[n/q].Name + "/" + r.Forces[n%q].Name
}

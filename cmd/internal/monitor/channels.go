package monitor

import (
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// channels are the rig's channels in the order of the pipeline: forces, then responses.
func channels(r *rig.Rig) []rig.Channel {
	return append(append([]rig.Channel{}, r.Forces...), r.Responses...)
}

// channelsInUse are their indices in the stream.
func channelsInUse(r *rig.Rig) []int {
	var indices []int
	for _, ch := range channels(r) {
		indices = append(indices, ch.Index)
	}
	return indices
}

func names(r *rig.Rig) []string {
	var names []string
	for _, ch := range channels(r) {
		names = append(names, ch.Name)
	}
	return names
}

func shapeOf(r *rig.Rig) spectra.Shape {
	return spectra.Shape{Lines: r.Grid.Lines, Forces: len(r.Forces), Responses: len(r.Responses)}
}

// drivingPoints are those of the rig's forces.
func drivingPoints(r *rig.Rig) []estimate.DrivingPoint {
	points := make([]estimate.DrivingPoint, len(r.Forces))
	for i, response := range r.DrivingPoints() {
		points[i] = estimate.DrivingPoint{Response: response, Sign: r.DrivingSign(i)}
	}
	return points
}

// frfName names frequency response n of (p,q).
func frfName(r *rig.Rig, n int) string {
	q := len(r.Forces)
	return r.Responses[n/q].Name + "/" + r.Forces[n%q].Name
}

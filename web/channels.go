package web

import "shakerwatch/acquire/rig"

// drivingPoints are, for each force of r, the index of its driving-point response, -1 without one:
// the first that shares point and axis letter.
func drivingPoints(r *rig.Rig) []int {
	points := make([]int, len(r.Forces))
	for i, f := range r.Forces {
		points[i] = -1
		for o, c := range r.Responses {
			if c.Point == f.Point && c.Letter() == f.Letter() {
				points[i] = o
				break
			}
		}
	}
	return points
}

// pairs are the pairs a < b of forces that both have a driving-point response, in the order of
// estimate.Estimates.
func pairs(points []int) [][2]int {
	list := [][2]int{}
	for b := range points {
		for a := range b {
			if points[a] >= 0 && points[b] >= 0 {
				list = append(list, [2]int{a, b})
			}
		}
	}
	return list
}

package rig

import "math"

// A Pair is a force and its driving-point response, as indices into Rig.Forces and Rig.Responses.
type Pair struct{ Force, Response int }

// DrivingPoints gives for each force the index of its driving-point response, or -1: the first
// response in file order that shares its point and axis letter. The caller owns the slice.
func (r *Rig) DrivingPoints() []int {
	points := make([]int, len(r.Forces))
	for i := range r.Forces {
		points[i] = r.drivingPoint(i)
	}
	return points
}

func (r *Rig) drivingPoint(force int) int {
	f := r.Forces[force]
	for o, c := range r.Responses {
		if c.Point == f.Point && c.Letter() == f.Letter() {
			return o
		}
	}
	return -1
}

// DrivingPairs lists the forces that have a driving-point response, in file order. The caller owns
// the slice.
func (r *Rig) DrivingPairs() []Pair {
	var pairs []Pair
	for i, o := range r.DrivingPoints() {
		if o >= 0 {
			pairs = append(pairs, Pair{Force: i, Response: o})
		}
	}
	return pairs
}

// DrivingSign is -1 when the axes of force and its driving-point response point in opposite
// directions, 1 when in the same, and NaN when the force has no driving-point response.
// 0 <= force < len(r.Forces), else it panics.
func (r *Rig) DrivingSign(force int) float64 {
	o := r.drivingPoint(force)
	if o < 0 {
		return math.NaN()
	}
	return r.Forces[force].Sign() * r.Responses[o].Sign()
}

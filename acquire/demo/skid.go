package demo

import "math"

// The skid: a welded frame of two rails and cross members with a pump and a motor pedestal, hung on
// soft cords. x runs along the rails, y across, z up. All figures of this file are our own choice.
const (
	skidLengthM = 2.4
	skidWidthM  = 1.0
	skidMassKg  = 80

	// swayTwist is how much the frame twists when it bends sideways, because the shear centre of an
	// open section lies off its centroid: vertical motion at the rails per lateral motion.
	swayTwist = 0.35
)

// skidPoints are the places where a sensor or a shaker can stand. heightM is above the plane about
// which the frame bends.
var skidPoints = []struct {
	name            string
	xM, yM, heightM float64
}{
	// the rail at y = 0
	{"1", 0.03, 0.00, 0.12},
	{"2", 0.28, 0.00, 0.12},
	{"3", 0.85, 0.00, 0.12},
	{"4", 1.33, 0.00, 0.12},
	{"5", 1.90, 0.00, 0.12},
	{"6", 2.37, 0.00, 0.12},
	// the rail at y = 1
	{"7", 0.03, 1.00, 0.12},
	{"8", 0.52, 1.00, 0.12},
	{"9", 0.98, 1.00, 0.12},
	{"10", 1.45, 1.00, 0.12},
	{"11", 2.02, 1.00, 0.12},
	{"12", 2.37, 1.00, 0.12},
	// the cross members
	{"13", 0.40, 0.45, 0.06},
	{"14", 1.20, 0.55, 0.06},
	{"15", 2.00, 0.40, 0.06},
	// the pump pedestal
	{"16", 0.60, 0.30, 0.26},
	{"17", 0.60, 0.70, 0.26},
	// the motor pedestal
	{"18", 1.62, 0.30, 0.20},
	{"19", 1.62, 0.70, 0.20},
	// the pipe flange
	{"20", 0.10, 0.50, 0.30},
}

// A family is a kind of mode shape.
type family int

const (
	plate family = iota // bending along x times bending along y, seen in z; the height turns slopes into x and y
	sway                // bending along x, seen in y, with a twist; the distance from the middle turns slopes into x
	surge               // all of it along x
)

// skidModes are the modes of the frame: the suspension's six first, then the flexible ones. The
// figures keep most half-power bandwidths (2 damping frequency) at 4 lines of 0.625 Hz; the lowest
// modes reach that only with the extra damping of hoses and cords. 248.0 and 252.6 Hz are the
// close pair: 1.3 half-power bandwidths apart.
var skidModes = []struct {
	kind        family
	along       int // order along x
	across      int // order along y, of plate only
	frequencyHz float64
	damping     float64
}{
	{surge, 0, 0, 0.9, 0.06},
	{sway, 0, 0, 1.0, 0.06},
	{sway, 1, 0, 1.3, 0.06},
	{plate, 0, 0, 2.1, 0.05},
	{plate, 0, 1, 2.6, 0.05},
	{plate, 1, 0, 2.9, 0.05},

	{plate, 1, 1, 43.7, 0.028},
	{plate, 2, 0, 71.2, 0.018},
	{sway, 2, 0, 117.4, 0.012},
	{plate, 2, 1, 152.9, 0.0095},
	{plate, 3, 0, 196.5, 0.0080},
	{plate, 0, 2, 248.0, 0.0070},
	{plate, 3, 1, 252.6, 0.0070},
	{sway, 3, 0, 318.2, 0.0060},
	{plate, 4, 0, 447.8, 0.0055},
	{plate, 4, 1, 622.6, 0.0050},
	{sway, 4, 0, 731.9, 0.0055},
	{sway, 5, 0, 904.2, 0.0050},
}

// newSkid returns the frame.
func newSkid() *structure {
	s := &structure{topHz: 1000}
	for _, p := range skidPoints {
		s.points = append(s.points, p.name)
	}
	for _, m := range skidModes {
		shape := make([][3]float64, len(skidPoints))
		for i, p := range skidPoints {
			shape[i] = skidShape(m.kind, m.along, m.across, p.xM, p.yM, p.heightM)
		}
		s.modes = append(s.modes, mode{2 * math.Pi * m.frequencyHz, m.damping, shape})
	}
	return s
}

// skidShape is a mode's motion along x, y and z at a place, kg^-1/2. Cross sections stay plane, so
// what is off the bending axis moves with the slope.
func skidShape(kind family, along, across int, xM, yM, heightM float64) [3]float64 {
	fx, slopeX := beam(along, xM/skidLengthM)
	slopeX /= skidLengthM
	unit := 1 / math.Sqrt(skidMassKg)
	switch kind {
	case plate:
		fy, slopeY := beam(across, yM/skidWidthM)
		slopeY /= skidWidthM
		return [3]float64{-unit * heightM * slopeX * fy, -unit * heightM * fx * slopeY, unit * fx * fy}
	case sway:
		unit /= math.Sqrt(1 + swayTwist*swayTwist)
		tilt, _ := beam(1, yM/skidWidthM)
		return [3]float64{-unit * (yM - skidWidthM/2) * slopeX, unit * fx, unit * swayTwist * tilt * fx}
	default:
		return [3]float64{unit, 0, 0}
	}
}

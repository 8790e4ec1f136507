package rig

import (
	"math"
	"slices"
)

// A Point is a place of the structure, for drawings only: no number depends on it.
type Point struct {
	Name    string  // unique among the points; that of Channel.Point
	X, Y, Z float64 // m
	Line    int     // of the point's name in the file, for messages
}

// maxPlaceM bounds coordinates. No structure reaches that far from its origin; millimetres given for
// metres often do.
const maxPlaceM = 10_000

var coordinate = bound{
	func(v float64) bool { return math.Abs(v) <= maxPlaceM },
	"give metres, at most 10000 from the origin",
}

// readPoint reads one point. Each coordinate has to be there: one that was forgotten would put the
// point somewhere.
func readPoint(s *section) Point {
	p := Point{X: math.NaN(), Y: math.NaN(), Z: math.NaN()}
	s.name("name", &p.Name)
	if p.Name != "" {
		s.label = s.kind + " " + quote(p.Name)
	}
	p.Line = s.lineOf("name")
	s.number("x", &p.X, coordinate)
	s.number("y", &p.Y, coordinate)
	s.number("z", &p.Z, coordinate)
	s.missing("name", "give that of the channels at this point")
	for _, key := range []string{"x", "y", "z"} {
		s.missing(key, "give metres")
	}
	s.done()
	return p
}

// checkPoints reports a point that is placed twice.
func (f *file) checkPoints() {
	seen := map[string]int{}
	for i, s := range f.points {
		name := f.rig.Points[i].Name
		if name == "" {
			continue
		}
		if first, ok := seen[name]; ok {
			s.add("name", "the point is placed on line %d already: keep one", first)
			continue
		}
		seen[name] = s.lineOf("name")
	}
}

// unplaced are the points of channels that have no place though others have one, in the order of the
// channels.
func (r *Rig) unplaced() []string {
	if len(r.Points) == 0 {
		return nil
	}
	var list []string
	for _, c := range r.Channels() {
		placed := slices.ContainsFunc(r.Points, func(p Point) bool { return p.Name == c.Point })
		if !placed && !slices.Contains(list, c.Point) {
			list = append(list, c.Point)
		}
	}
	return list
}

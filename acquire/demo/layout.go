package demo

import (
	"fmt"

	"shakerwatch/acquire/rig"
)

// A layout says where the channels of a rig stand on a structure.
type layout struct {
	structure *structure
	shakers   []attached // q, in rig order
	sensors   []dof      // p, in rig order
	floors    []floor    // of the noise of each channel, forces first
}

// newLayout finds the channels of r on s. The error is a rig.Mistakes with each channel that does
// not fit there.
func newLayout(r *rig.Rig, s *structure) (layout, error) {
	l := layout{structure: s}
	var mistakes rig.Mistakes
	report := func(c rig.Channel, kind, format string, args ...any) {
		text := fmt.Sprintf("%s %q: ", kind, c.Name) + fmt.Sprintf(format, args...)
		mistakes = append(mistakes, rig.Mistake{Path: r.Path, Line: c.Line, Text: text})
	}
	find := func(c rig.Channel, kind string) (dof, bool) {
		at, ok := s.find(c.Point, c.Letter())
		if !ok {
			report(c, kind, "the simulated structure has no point %q: choose a point from %s to %s",
				c.Point, s.points[0], s.points[len(s.points)-1])
		}
		return at, ok
	}
	taken := make(map[dof]string)
	for _, c := range r.Forces {
		at, ok := find(c, "force")
		if other, twice := taken[at]; ok && twice {
			report(c, "force", "the simulated shaker of force %q pushes at point %q along %s already: choose another point or axis",
				other, c.Point, c.Letter())
		} else if ok {
			taken[at] = c.Name
		}
		l.shakers = append(l.shakers, attached{shaker: defaultShaker, at: at})
		l.floors = append(l.floors, forceFloor)
	}
	for _, c := range r.Responses {
		at, _ := find(c, "response")
		l.sensors = append(l.sensors, at)
		l.floors = append(l.floors, responseFloor)
	}
	if mistakes != nil {
		return layout{}, mistakes
	}
	return l, nil
}

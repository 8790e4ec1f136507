package demo

import (
	"fmt"
	"math"
	"slices"
)

// A condition is the mechanical state of a rig: what its plant is built from. Lists are as long as what
// they describe, or nil where all of it is sound.
type condition struct {
	links    []link    // of each shaker
	rates    []float64 // factor on each mode's frequency
	dampings []float64 // factor on each mode's damping
	tilts    []float64 // of each sensor towards the next axis, rad
	early    []int     // of each output, in sub steps before a frame's end
	knocked  []dof     // where a hammer strikes: an input each, behind the currents
	spring   *fitted
}

// key is equal for equal conditions.
func (c *condition) key() string {
	return fmt.Sprint(c.links, c.rates, c.dampings, c.tilts, c.early, c.knocked, c.spring)
}

// ensure returns list, or when it is nil one of n times what is sound.
func ensure[T any](list []T, n int, sound T) []T {
	if list == nil {
		list = slices.Repeat([]T{sound}, n)
	}
	return list
}

// build returns the plant of a layout in a condition, at rest.
func (c *condition) build(l layout, rateHz float64, sub int) plant {
	shakers := slices.Clone(l.shakers)
	for i, link := range c.links {
		shakers[i].link = link
	}
	pickups := make([]push, len(l.sensors))
	for o, at := range l.sensors {
		pickups[o] = l.structure.pushAt(at)
		if c.tilts != nil && c.tilts[o] != 0 {
			pickups[o] = l.structure.tilted(at, c.tilts[o])
		}
	}
	var pushes []push
	for _, at := range c.knocked {
		pushes = append(pushes, l.structure.pushAt(at))
	}
	stepS := 1 / (rateHz * float64(sub))
	if c.spring == nil {
		return newStepper(assemble(c.modified(l.structure), shakers, pickups, pushes), stepS, sub, c.early...)
	}
	pushes = append(pushes, c.spring.across)
	return newSpringStepper(assemble(c.modified(l.structure), shakers, pickups, pushes), stepS, sub, *c.spring, c.early...)
}

// modified is the structure with its modes moved.
func (c *condition) modified(s *structure) *structure {
	if c.rates == nil && c.dampings == nil {
		return s
	}
	changed := &structure{points: s.points, modes: slices.Clone(s.modes)}
	for r, factor := range c.rates {
		changed.modes[r].rateRad *= factor
	}
	for r, factor := range c.dampings {
		changed.modes[r].damping *= factor
	}
	return changed
}

// tilted is the motion that a sensor feels that is turned by some rad from its axis towards the next one.
func (s *structure) tilted(at dof, rad float64) push {
	sin, cos := math.Sincos(rad)
	own, next := s.pushAt(at), s.pushAt(dof{at.point, (at.axis + 1) % 3})
	for r := range own {
		own[r] = cos*own[r] + sin*next[r]
	}
	return own
}

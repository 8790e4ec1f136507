package demo

import "gonum.org/v1/gonum/mat"

// An attached shaker stands at a degree of freedom of the structure and pushes along its positive axis.
type attached struct {
	shaker
	at   dof
	link link
}

// A push is a way to act on the structure beside the shakers: for each mode, the share of a unit force
// that it feels, kg^-1/2. By reciprocity it is a way to sense its motion too.
type push []float64

// pushAt is a push along a degree of freedom.
func (s *structure) pushAt(at dof) push {
	p := make(push, len(s.modes))
	for r := range p {
		p[r] = s.modes[r].at(at)
	}
	return p
}

// couple returns the structure with its shakers as one system. Its inputs are the shakers' currents
// in A (or voltages in V), then the forces of the pushes in N. Its outputs are the forces of the
// load cells in N, in the order of the shakers, then the accelerations at the sensors in m/s², all
// along positive axes.
//
// The states are physical, so that they outlive a change of the system: modal displacements, modal
// velocities, armature displacements, armature velocities.
func couple(s *structure, shakers []attached, sensors []dof, pushes ...push) stateSpace {
	pickups := make([]push, len(sensors))
	for o, at := range sensors {
		pickups[o] = s.pushAt(at)
	}
	return assemble(s, shakers, pickups, pushes)
}

// assemble is couple with sensors that may lie between the axes.
func assemble(s *structure, shakers []attached, pickups, pushes []push) stateSpace {
	n, q := len(s.modes), len(shakers)
	states, inputs := 2*n+2*q, q+len(pushes)
	sys := stateSpace{
		a: mat.NewDense(states, states, nil),
		b: mat.NewDense(states, inputs, nil),
		c: mat.NewDense(q+len(pickups), states, nil),
		d: mat.NewDense(q+len(pickups), inputs, nil),
	}
	for r := range s.modes {
		m := &s.modes[r]
		sys.a.Set(r, n+r, 1)
		sys.a.Set(n+r, r, -m.rateRad*m.rateRad)
		sys.a.Set(n+r, n+r, -2*m.damping*m.rateRad)
	}
	for i := range shakers {
		switch sh := &shakers[i]; sh.link.state {
		case joined:
			sys.join(s, sh, i, q)
		case hanging:
			sys.hang(sh, i, n, q)
		case unhooked:
			sh.armature(&sys, i, n, q, sh.armatureKg)
		}
	}
	for j, p := range pushes {
		for r, share := range p {
			sys.b.Set(n+r, q+j, share)
		}
	}
	sys.loadWithCells(s, shakers)
	for o, p := range pickups {
		for r, share := range p {
			addScaled(sys.c.RawRowView(q+o), share, sys.a.RawRowView(n+r))
			addScaled(sys.d.RawRowView(q+o), share, sys.b.RawRowView(n+r))
		}
	}
	return sys
}

// join writes the rows of shaker i of q that pushes the structure.
func (sys *stateSpace) join(s *structure, sh *attached, i, q int) {
	n := len(s.modes)
	force := sys.c.RawRowView(i)
	sh.force(force, s, i, q)
	sh.armature(sys, i, n, q, sh.armatureKg)
	addScaled(sys.a.RawRowView(2*n+q+i), -1/sh.armatureKg, force)
	for r := range s.modes {
		addScaled(sys.a.RawRowView(n+r), s.modes[r].at(sh.at), force)
	}
}

// armature writes the rows of the armature of shaker i of q, which moves a mass against its flexures,
// beside a structure of n modes.
func (sh *attached) armature(sys *stateSpace, i, n, q int, massKg float64) {
	position, velocity := 2*n+i, 2*n+q+i
	sys.a.Set(position, velocity, 1)
	sys.a.Set(velocity, position, -sh.flexureNPerM/massKg)
	sys.a.Set(velocity, velocity, -sh.resistance()/massKg)
	sys.b.Set(velocity, i, sh.gain()/massKg)
}

// force puts the force of shaker i of q on the structure, as a function of the states, into dst: the
// stinger's stiffness and damping times armature minus structure.
func (sh *attached) force(dst []float64, s *structure, i, q int) {
	n := len(s.modes)
	dst[2*n+i] = sh.stingerNPerM
	dst[2*n+q+i] = sh.stingerNSPerM
	for r := range s.modes {
		dst[r] = -sh.stingerNPerM * s.modes[r].at(sh.at)
		dst[n+r] = -sh.stingerNSPerM * s.modes[r].at(sh.at)
	}
}

// addScaled adds scale times x to dst.
func addScaled(dst []float64, scale float64, x []float64) {
	for i, v := range x {
		dst[i] += scale * v
	}
}

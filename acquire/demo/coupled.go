package demo

import "gonum.org/v1/gonum/mat"

// An attached shaker stands at a degree of freedom of the structure and pushes along its positive axis.
type attached struct {
	shaker
	at dof
}

// couple returns the structure with its shakers as one system. Its inputs are the shakers' currents
// in A. Its outputs are the forces of the load cells in N, in the order of the shakers, then the
// accelerations at the sensors in m/s², all along positive axes.
//
// The states are physical, so that they outlive a change of the system: modal displacements, modal
// velocities, armature displacements, armature velocities.
func couple(s *structure, shakers []attached, sensors []dof) stateSpace {
	n, q := len(s.modes), len(shakers)
	states := 2*n + 2*q
	sys := stateSpace{
		a: mat.NewDense(states, states, nil),
		b: mat.NewDense(states, q, nil),
		c: mat.NewDense(q+len(sensors), states, nil),
		d: mat.NewDense(q+len(sensors), q, nil),
	}
	for r := range s.modes {
		m := &s.modes[r]
		sys.a.Set(r, n+r, 1)
		sys.a.Set(n+r, r, -m.rateRad*m.rateRad)
		sys.a.Set(n+r, n+r, -2*m.damping*m.rateRad)
	}
	for i, sh := range shakers {
		force := sys.c.RawRowView(i)
		sh.force(force, s, i, q)
		position, velocity := 2*n+i, 2*n+q+i
		sys.a.Set(position, velocity, 1)
		sys.a.Set(velocity, position, -sh.flexureNPerM/sh.armatureKg)
		sys.a.Set(velocity, velocity, -sh.flexureNSPerM/sh.armatureKg)
		addScaled(sys.a.RawRowView(velocity), -1/sh.armatureKg, force)
		sys.b.Set(velocity, i, sh.forceNPerA/sh.armatureKg)
		for r := range s.modes {
			addScaled(sys.a.RawRowView(n+r), s.modes[r].at(sh.at), force)
		}
	}
	for o, at := range sensors {
		for r := range s.modes {
			addScaled(sys.c.RawRowView(q+o), s.modes[r].at(at), sys.a.RawRowView(n+r))
		}
	}
	return sys
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

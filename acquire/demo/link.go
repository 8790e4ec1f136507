package demo

import "gonum.org/v1/gonum/mat"

// A link says how a shaker and the structure hang together. The zero link is sound.
type link struct {
	state  linkState
	massKg float64 // that the cell carries; 0 when joined
}

type linkState int

const (
	joined   linkState = iota // the stinger pushes the structure through the load cell
	hanging                   // the cell has left the structure and carries a mass that moves with the armature
	unhooked                  // the stinger has left the cell, which carries a mass that moves with the structure
)

// hang writes the rows of shaker i of q that no longer reaches the structure of n modes: the mass on its
// cell moves with the armature, and the cell feels what moves that mass. The stinger counts as
// rigid, because on a light mass it resonates far above the band.
func (sys *stateSpace) hang(sh *attached, i, n, q int) {
	sh.armature(sys, i, n, q, sh.armatureKg+sh.link.massKg)
	velocity := 2*n + q + i
	addScaled(sys.c.RawRowView(i), sh.link.massKg, sys.a.RawRowView(velocity))
	addScaled(sys.d.RawRowView(i), sh.link.massKg, sys.b.RawRowView(velocity))
}

// loadWithCells makes the structure carry the cells that hang on it, and writes their forces: each
// is what its mass leaves to be felt, minus mass times acceleration. The modal accelerations solve
// (I + sum of m phi phi') accelerations = forces.
func (sys *stateSpace) loadWithCells(s *structure, shakers []attached) {
	n := len(s.modes)
	var mass *mat.Dense
	for i := range shakers {
		if shakers[i].link.state != unhooked {
			continue
		}
		if mass == nil {
			mass = mat.NewDense(n, n, nil)
			for r := range n {
				mass.Set(r, r, 1)
			}
		}
		phi := mat.NewVecDense(n, s.pushAt(shakers[i].at))
		mass.RankOne(mass, shakers[i].link.massKg, phi, phi)
	}
	if mass == nil {
		return
	}
	for _, m := range []*mat.Dense{sys.a, sys.b} {
		_, columns := m.Dims()
		modal := m.Slice(n, 2*n, 0, columns).(*mat.Dense)
		var solved mat.Dense
		// the matrix is positive definite, so it has an inverse
		if err := solved.Solve(mass, modal); err != nil {
			panic("demo: the mass matrix of a structure with cells is singular: " + err.Error())
		}
		modal.Copy(&solved)
	}
	for i := range shakers {
		if shakers[i].link.state == unhooked {
			shares := s.pushAt(shakers[i].at)
			for r, share := range shares {
				addScaled(sys.c.RawRowView(i), -shakers[i].link.massKg*share, sys.a.RawRowView(n+r))
				addScaled(sys.d.RawRowView(i), -shakers[i].link.massKg*share, sys.b.RawRowView(n+r))
			}
		}
	}
}

// rejoin puts the armature of shaker i of q where the structure is, as a technician does who fits a
// stinger without force in it.
func rejoin(states []float64, s *structure, at dof, i, q int) {
	n := len(s.modes)
	position, velocity := 2*n+i, 2*n+q+i
	states[position], states[velocity] = 0, 0
	for r := range s.modes {
		states[position] += s.modes[r].at(at) * states[r]
		states[velocity] += s.modes[r].at(at) * states[n+r]
	}
}

package demo

import "fmt"

// A Spring is a stiffening spring: the force along an axis at point From is -CubicNPerM3 times the
// third power of its displacement relative to point To, and the opposite force acts at To.
type Spring struct {
	From, To    string  // points; an empty To is the ground
	Axis        string  // "x", "y" or "z"
	CubicNPerM3 float64 // 0 is no spring
}

// skidSpringNPerM3 is the spring that at full random drive is as stiff on average as the skid between
// the two pedestals along x: 3 CubicNPerM3 times the mean square of the displacement, 12 µm rms,
// against 6.6e6 N/m. (Statistical linearisation of a cubic spring under Gaussian motion: Roberts and Spanos,
// Random Vibration and Statistical Linearization, 1990, from memory.)
const skidSpringNPerM3 = 1.6e16

// SkidSpring is a coupling between the pedestals of pump and motor that stiffens along x. At 1 it is
// as stiff as the skid there at full drive, and at half the drive a quarter of that.
func SkidSpring(nonlinearity float64) Spring {
	return Spring{From: "16", To: "18", Axis: "x", CubicNPerM3: nonlinearity * skidSpringNPerM3}
}

// SetSpring puts a spring on the structure in the place of the one before, from the next frame on.
// A source without one, as New returns it, is linear. With a spring a source costs about six times
// as much time, and Truth is what holds for small motion. It may be called while another goroutine
// reads.
func (s *Source) SetSpring(spring Spring) error {
	if !(spring.CubicNPerM3 >= 0 && spring.CubicNPerM3 < maxCubic) {
		return fmt.Errorf("spring at point %q: %g N/m³: give 0 to %g", spring.From, spring.CubicNPerM3, maxCubic)
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	if spring.CubicNPerM3 == 0 {
		s.spring = nil
		s.replan()
		return nil
	}
	across, err := s.across(spring)
	if err != nil {
		return err
	}
	s.spring = &fitted{across, spring.CubicNPerM3}
	s.replan()
	return nil
}

// maxCubic keeps products finite. A spring of 1e20 N/m³ is rigid to a micrometre.
const maxCubic = 1e24

// across is the displacement across a spring for each modal displacement, which is also what its
// force feeds into the mode.
func (s *Source) across(spring Spring) (push, error) {
	structure := s.layout.structure
	ends := make([]push, 2)
	for i, point := range []string{spring.From, spring.To} {
		at, ok := structure.find(point, spring.Axis)
		switch {
		case ok:
			ends[i] = structure.pushAt(at)
		case i == 1 && point == "":
			ends[i] = make(push, len(structure.modes))
		default:
			return nil, fmt.Errorf("spring from point %q to %q along %q: the simulated structure has no such place: choose points from %s to %s and x, y or z",
				spring.From, spring.To, spring.Axis, structure.points[0], structure.points[len(structure.points)-1])
		}
	}
	addScaled(ends[0], -1, ends[1])
	return ends[0], nil
}

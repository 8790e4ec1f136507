package demo

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
)

// randomPoints is the number of points of a structure drawn at random.
const randomPoints = 16

// uniform draws from lo to hi.
func uniform(rng *rand.Rand, lo, hi float64) float64 { return lo + (hi-lo)*rng.Float64() }

// randomDamping draws 0.5 to 2 %, as many at half as at twice: what welded and bolted frames have (common
// practice, no source).
func randomDamping(rng *rand.Rand) float64 { return 0.005 * math.Pow(4, rng.Float64()) }

// suspensionDamping is that of cords, which are hung with rubber. Our own choice.
const suspensionDamping = 0.05

// A drawnMode is a mode in the making: its frequency relative to the lowest flexible one, or of the suspension.
type drawnMode struct {
	freqHz float64
	rigid  bool
	shape  func(xM, yM, heightM float64) [3]float64 // kg^-1/2
}

// randomBeam draws a beam along x that bends in two planes, turned about x so that neither lies in y or z. Its
// lowest flexible mode is at firstHz.
func randomBeam(rng *rand.Rand, firstHz float64) (modes []drawnMode, lengthM, widthM, massKg float64) {
	lengthM, massKg = uniform(rng, 1, 2.5), uniform(rng, 1.5, 6)
	unit := 1 / math.Sqrt(massKg)
	turn := uniform(rng, 0.3, 1.2)
	stiffer := uniform(rng, 1.2, 2.2) // the second plane, in frequency
	for plane, ratio := range []float64{1, stiffer} {
		sin, cos := math.Sincos(turn + float64(plane)*math.Pi/2)
		for order := range len(beamRoots) + 2 {
			m := drawnMode{rigid: order < 2, freqHz: firstHz * uniform(rng, 0.02, 0.04)}
			if !m.rigid {
				m.freqHz = ratio * firstHz * math.Pow(beamRoots[order-2]/beamRoots[0], 2)
			}
			m.shape = func(xM, _, _ float64) [3]float64 {
				f, _ := beam(order, xM/lengthM)
				return [3]float64{0, unit * f * cos, unit * f * sin}
			}
			modes = append(modes, m)
		}
	}
	return modes, lengthM, 0, massKg
}

// plateTerm are the factors of a free-free beam mode of some order in a plate's frequency
// (Warburton, Proc. Inst. Mech. Eng. 168, 1954, from memory).
func plateTerm(order int) (g, h, j float64) {
	switch order {
	case 0:
		return 0, 0, 0
	case 1:
		return 0, 0, 12 / (math.Pi * math.Pi)
	case 2:
		return 1.506, 1.248, 5.017
	default:
		m := float64(order) - 0.5
		return m, m * m * (1 - 2/(m*math.Pi)), m * m * (1 + 6/(m*math.Pi))
	}
}

// plateFactor is what a plate's natural frequency is proportional to, with ratio its length per
// width and Poisson's ratio 0.3.
func plateFactor(along, across int, ratio float64) float64 {
	const poisson = 0.3
	gx, hx, jx := plateTerm(along)
	gy, hy, jy := plateTerm(across)
	r2 := ratio * ratio
	return math.Sqrt(math.Pow(gx, 4) + math.Pow(gy, 4)*r2*r2 + 2*r2*(poisson*hx*hy+(1-poisson)*jx*jy))
}

// randomPlate draws a plate that bends along z, with its lowest flexible mode at firstHz. What
// stands on it moves along x and y with the slope.
func randomPlate(rng *rand.Rand, firstHz float64) (modes []drawnMode, lengthM, widthM, massKg float64) {
	lengthM, massKg = uniform(rng, 0.8, 1.6), uniform(rng, 2, 8)
	ratio := uniform(rng, 1.15, 2)
	widthM = lengthM / ratio
	unit := 1 / math.Sqrt(massKg)
	lowest := min(plateFactor(1, 1, ratio), plateFactor(2, 0, ratio))
	for along := range 5 {
		for across := range 4 {
			m := drawnMode{rigid: along+across < 2, freqHz: firstHz * uniform(rng, 0.02, 0.04)}
			if !m.rigid {
				m.freqHz = firstHz * plateFactor(along, across, ratio) / lowest
			}
			m.shape = func(xM, yM, heightM float64) [3]float64 {
				fx, slopeX := beam(along, xM/lengthM)
				fy, slopeY := beam(across, yM/widthM)
				return [3]float64{-unit * heightM * slopeX / lengthM * fy, -unit * heightM * fx * slopeY / widthM, unit * fx * fy}
			}
			modes = append(modes, m)
		}
	}
	return modes, lengthM, widthM, massKg
}

// randomStructure draws a structure with modes up to a fifth above a band of topHz, a close pair among
// them, and returns how heavy it is.
func randomStructure(rng *rand.Rand, shape string, topHz float64) (s *structure, massKg float64) {
	s = &structure{topHz: 1.2 * topHz}
	build := randomPlate
	if shape == "beam" {
		build = randomBeam
	}
	drawn, lengthM, widthM, massKg := build(rng, topHz*uniform(rng, 0.15, 0.25))
	drawn = slices.DeleteFunc(drawn, func(m drawnMode) bool { return m.freqHz > s.topHz })
	slices.SortFunc(drawn, func(a, b drawnMode) int { return cmp.Compare(a.freqHz, b.freqHz) })
	for _, m := range drawn {
		damping := randomDamping(rng)
		if m.rigid {
			damping = suspensionDamping
		}
		s.modes = append(s.modes, mode{2 * math.Pi * m.freqHz, damping, nil})
	}
	closePair(rng, s.modes, drawn, topHz)
	for p := range randomPoints {
		s.points = append(s.points, strconv.Itoa(p+1))
		// evenly along, with a scatter, so that no point lies on another
		xM := lengthM * (float64(p) + uniform(rng, 0.1, 0.9)) / randomPoints
		yM := widthM * rng.Float64()
		heightM := uniform(rng, 0.02, 0.15)
		for r := range s.modes {
			s.modes[r].shape = append(s.modes[r].shape, drawn[r].shape(xM, yM, heightM))
		}
	}
	return s, massKg
}

// closePair moves a flexible mode within the band to 0.8 to 1.5 half-power bandwidths above the one below it.
func closePair(rng *rand.Rand, modes []mode, drawn []drawnMode, topHz float64) {
	var pairs []int // index of the upper one
	for r := 1; r < len(modes); r++ {
		if !drawn[r-1].rigid && drawn[r].freqHz < 0.95*topHz {
			pairs = append(pairs, r)
		}
	}
	if len(pairs) == 0 {
		return
	}
	r := pairs[rng.IntN(len(pairs))]
	below := &modes[r-1]
	modes[r].damping = below.damping * uniform(rng, 0.8, 1.25)
	modes[r].rateRad = below.rateRad * (1 + uniform(rng, 0.8, 1.5)*2*below.damping)
}

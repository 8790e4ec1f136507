package demo

import "math"

// beamRoots are the first roots of cos b cosh b = 1, of the free-free bending modes with two and
// more nodes (Blevins, Formulas for Natural Frequency and Mode Shape, 1979, from memory; a test
// puts them into the equation).
var beamRoots = [...]float64{
	4.730040744862704,
	7.853204624095838,
	10.995607838001671,
	14.137165491257464,
	17.278759657399480,
}

// beam is the deflection at s, 0 to 1 along a free-free beam, of its mode with the given order, and
// its derivative with respect to s. Order 0 is translation, 1 rotation, 2 the first bending mode,
// at most len(beamRoots)+1. The mean square over the beam is 1, and any two orders are orthogonal.
func beam(order int, s float64) (deflection, slope float64) {
	switch order {
	case 0:
		return 1, 0
	case 1:
		return math.Sqrt(3) * (2*s - 1), 2 * math.Sqrt(3)
	}
	b := beamRoots[order-2]
	ratio := (math.Cosh(b) - math.Cos(b)) / (math.Sinh(b) - math.Sin(b))
	sin, cos := math.Sincos(b * s)
	sinh, cosh := math.Sinh(b*s), math.Cosh(b*s)
	return cosh + cos - ratio*(sinh+sin), b * (sinh - sin - ratio*(cosh+cos))
}

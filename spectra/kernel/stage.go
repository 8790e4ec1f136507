package kernel

// A stage is one pass over all points.
type stage struct {
	m     int
	turns []float64
	pass  func(x, turns []float64, m int)
	last  func(x []float64) // instead of pass
}

// run takes the points of all lanes through the stage.
//
// To take each part through all later stages as soon as it is small enough for the first-level cache
// was tried: no gain up to blocks of 16384, 5 in 100 at 65536.
func (s *stage) run(x []float64) {
	if s.last != nil {
		s.last(x)
		return
	}
	s.pass(x, s.turns, s.m)
}

// factor gives the radices whose product is n, in the order of the passes. Where n is even, the last
// is 2, 4 or 8. It is not ok when n has a prime factor above 5.
func factor(n int) (radices []int, ok bool) {
	for _, r := range []int{5, 3} {
		for ; n%r == 0; n /= r {
			radices = append(radices, r)
		}
	}
	for ; n%4 == 0 && n != 8; n /= 4 {
		radices = append(radices, 4)
	}
	if n == 2 || n == 8 {
		return append(radices, n), true
	}
	return radices, n == 1
}

func newStages(radices []int, points int, loops *loops) []stage {
	var stages []stage
	for _, r := range radices {
		points /= r
		s := stage{m: points}
		switch {
		case r == 2:
			s.last = loops.last2
		case r == 4 && s.m == 1:
			s.last = loops.last4
		case r == 8:
			s.last = loops.last8
		case r == 3:
			s.pass = loops.pass3
		case r == 4:
			s.pass = loops.pass4
		case r == 5:
			s.pass = loops.pass5
		}
		if s.pass != nil {
			s.turns = newTurns(r, s.m)
		}
		stages = append(stages, s)
	}
	return stages
}

// newTurns are the factors e^{-2πi·p·k/(r·m)} of a pass, k from 1 to r-1 for each p.
func newTurns(r, m int) []float64 {
	var turns []float64
	for p := range m {
		for k := 1; k < r; k++ {
			u := unit(p*k, r*m)
			turns = append(turns, real(u), imag(u))
		}
	}
	return turns
}

// places says at which element each line of the transform stands after the passes: the digits of
// its number, of which the first pass makes the lowest, stand there in reversed order.
func places(radices []int, points int) []int {
	place := make([]int, points)
	for k := range place {
		rest, size := k, points
		for _, r := range radices {
			size /= r
			place[k] += rest % r * size
			rest /= r
		}
	}
	return place
}

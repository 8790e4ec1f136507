package decimate

import "fmt"

// factors splits d into the factors of the stages, in their order, so that an analysis frame costs
// the fewest multiplications. A large prime is one stage; 1 needs none. It panics unless
// 1 <= d <= MaxFactor.
func factors(d int) []int {
	if d < 1 || d > MaxFactor {
		panic(fmt.Sprintf("decimate: factor %d, want 1 to %d", d, MaxFactor))
	}
	_, best := cheapest(d)
	return best
}

// cheapest finds the factors and their multiplications for one analysis frame and channel. What a
// stage costs depends on its own factor and on what is left for later ones, so the first factor and
// the best way to do the rest can be chosen together.
func cheapest(d int) (cost int, best []int) {
	if d == 1 {
		return 0, nil
	}
	for k := 2; k <= d; k++ {
		if d%k != 0 {
			continue
		}
		rest := d / k
		restCost, restBest := cheapest(rest)
		c := rest*multiplications(k, rest) + restCost
		if best == nil || c < cost {
			cost, best = c, append([]int{k}, restBest...)
		}
	}
	return cost, best
}

// multiplications is the number for one output of the stage newLowpass(k, rest): one a pair of taps
// that are not zero, and one for the centre.
func multiplications(k, rest int) int {
	half := stageHalf(k, rest)
	return half - half/k + 1
}

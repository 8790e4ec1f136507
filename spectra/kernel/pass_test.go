package kernel

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"testing"
)

// runs are all passes of a set of loops, by radix.
func runs(l *loops) map[string]func(x []float64, m int) {
	pass := func(r int, pass func(x, turns []float64, m int)) func(x []float64, m int) {
		return func(x []float64, m int) { pass(x, newTurns(r, m), m) }
	}
	last := func(last func(x []float64)) func(x []float64, m int) {
		return func(x []float64, m int) { last(x) }
	}
	return map[string]func(x []float64, m int){
		"pass3": pass(3, l.pass3), "pass4": pass(4, l.pass4), "pass5": pass(5, l.pass5),
		"last2": last(l.last2), "last4": last(l.last4), "last8": last(l.last8),
	}
}

var passTable = []struct {
	name  string
	radix int
	m     []int
}{
	{"pass3", 3, []int{1, 2, 5, 16}}, {"pass4", 4, []int{1, 2, 5, 16}}, {"pass5", 5, []int{1, 2, 5, 16}},
	{"last2", 2, []int{1}}, {"last4", 4, []int{1}}, {"last8", 8, []int{1}},
}

// TestPassesAreTheirFormula computes the formula at the head of pass.go as it stands there.
func TestPassesAreTheirFormula(t *testing.T) {
	const transforms = 3
	for _, test := range passTable {
		for _, m := range test.m {
			r := test.radix
			before := noise(transforms*r*m*element, 3)
			after := slices.Clone(before)
			runs(&plain)[test.name](after, m)
			for n := range transforms * r * m {
				start, k, p := n/(r*m)*r*m, n/m%r, n%m
				for l := range Lanes {
					var want complex128
					for j := range r {
						want += at(before, start+p+m*j, l) * cmplx.Rect(1, -2*math.Pi*float64(j*k)/float64(r))
					}
					want *= cmplx.Rect(1, -2*math.Pi*float64(p*k)/float64(r*m))
					// Rounding of sums of at most eight terms near 1.
					if got := at(after, n, l); cmplx.Abs(got-want) > 2e-14 {
						t.Fatalf("%s, m %d: point %d of lane %d is %v, want %v", test.name, m, n, l, got, want)
					}
				}
			}
		}
	}
}

func TestPassesHaveTheSameBits(t *testing.T) {
	needVector(t)
	for _, test := range passTable {
		for _, m := range test.m {
			t.Run(fmt.Sprintf("%s/%d", test.name, m), func(t *testing.T) {
				want := sprinkle(noise(6*test.radix*m*element, 4), 5)
				got := slices.Clone(want)
				runs(&plain)[test.name](want, m)
				runs(fastest)[test.name](got, m)
				if i := bitsDiffer(got, want); i >= 0 {
					t.Errorf("float %d is %v, plain %v", i, got[i], want[i])
				}
			})
		}
	}
}

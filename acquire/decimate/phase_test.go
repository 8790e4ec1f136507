package decimate

import (
	"testing"

	"pgregory.net/rapid"
)

func TestPhaseCountsAsOneByOne(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		factor := rapid.Int64Range(1, 300).Draw(t, "factor")
		wait := rapid.Int64Range(1, factor).Draw(t, "wait")
		n := rapid.Int64Range(0, 2000).Draw(t, "n")
		p := phase{factor, wait}
		outputs := p.advance(n)
		for range n {
			if wait--; wait == 0 {
				wait = factor
				outputs--
			}
		}
		if outputs != 0 || p.wait != wait {
			t.Fatalf("%d outputs too many, wait %d, want %d", outputs, p.wait, wait)
		}
	})
}

package decimate

import "testing"

// splits calls f with every way to write d as an ordered product of factors of at least 2.
func splits(d int, before []int, f func([]int)) {
	if d == 1 {
		f(before)
		return
	}
	for k := 2; k <= d; k++ {
		if d%k == 0 {
			splits(d/k, append(before[:len(before):len(before)], k), f)
		}
	}
}

func TestFactorsAreTheCheapest(t *testing.T) {
	cost := func(d int, factors []int) int {
		sum, rest := 0, d
		for _, k := range factors {
			rest /= k
			taps := 0
			for n, c := range newLowpass(k, rest) {
				if c != 0 || n == 0 {
					taps++
				}
			}
			sum += taps * rest
		}
		return sum
	}
	for _, d := range []int{1, 2, 4, 12, 18, 30, 37, 64, 96, 144, 210, 240, 256} {
		chosen := factors(d)
		product := 1
		for _, k := range chosen {
			product *= k
		}
		if product != d {
			t.Fatalf("factors(%d) = %v", d, chosen)
		}
		least := cost(d, chosen)
		splits(d, nil, func(other []int) {
			if c := cost(d, other); c < least {
				t.Errorf("d = %d: %v costs %d, %v only %d", d, chosen, least, other, c)
			}
		})
		t.Logf("d = %d: %v, %.2f multiplications a source sample", d, chosen, float64(least)/float64(d))
	}
}

func TestHalfLength(t *testing.T) {
	for d := 1; d <= MaxFactor; d++ {
		if f := HalfLength(d); f > 24*d || (f == 0) != (d == 1) {
			t.Errorf("HalfLength(%d) = %d", d, f)
		}
	}
}

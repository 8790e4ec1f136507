package decimate

import (
	"math"
	"testing"
)

func TestLowpass(t *testing.T) {
	for _, c := range []struct {
		name    string
		k, rest int
		half    int // worked out by hand from Kaiser's formula; one less where the outermost is zero
	}{
		{"last stage by two", 2, 1, 31},                       // 99.05/(2.285*0.6872)/2 = 31.5: 32
		{"last stage by three", 3, 1, 47},                     // 47.3: 48
		{"half rate before the last", 2, 2, 11},               // 99.05/(2.285*1.9144)/2 = 11.3: 12
		{"large factor with little left", 127, 2, 719},        // 718.9
		{"small factor with much left", 2, 128, 7},            // 99.05/(2.285*3.1224)/2 = 6.9
		{"largest prime", 251, 1, 3959},                       // 3958.1
		{"whole of the largest factor at once", 256, 1, 4037}, // 4036.9
	} {
		t.Run(c.name, func(t *testing.T) {
			h := newLowpass(c.k, c.rest)
			if h.half() != c.half {
				t.Errorf("half length %d, want %d", h.half(), c.half)
			}
			sum := h[0]
			for n := 1; n < len(h); n++ {
				sum += 2 * h[n]
				if (h[n] == 0) != (n%c.k == 0) {
					t.Errorf("coefficient %d is %g", n, h[n])
				}
			}
			if math.Abs(sum-1) > 1e-14 {
				t.Errorf("the coefficients sum to 1%+g", sum-1)
			}
			// Half the output rate is half way down.
			half := h[0]
			for n := 1; n < len(h); n++ {
				half += 2 * h[n] * math.Cos(math.Pi*float64(n)/float64(c.k))
			}
			if math.Abs(half-0.5) > 1e-4 {
				t.Errorf("gain at half the output rate is %v", half)
			}
		})
	}
}

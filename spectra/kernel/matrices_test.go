package kernel

import (
	"fmt"
	"math"
	"slices"
	"testing"
)

func singles(x []float64) []float32 {
	s := make([]float32, len(x))
	for i, v := range x {
		s[i] = float32(v)
	}
	return s
}

// anyMatrices are q columns and p rows of noise on three lines, and weights of their rows.
func anyMatrices(q, p int) (m *Matrices, weights []float32) {
	m = NewMatrices(3, p, q)
	for n, v := range complexNoise(3*p*q, 1) {
		m.Set(n/(p*q), n/q%p, n%q, complex64(v))
	}
	weights = make([]float32, Whole(p))
	copy(weights, singles(noise(p, 2)))
	for o := range weights {
		weights[o] *= weights[o]
	}
	return m, weights
}

func TestMatricesKeepTheirValues(t *testing.T) {
	forSizes(t, func(t *testing.T, q, p int) {
		m, _ := anyMatrices(q, p)
		for n, v := range complexNoise(3*p*q, 1) {
			if line, row, column := n/(p*q), n/q%p, n%q; m.At(line, row, column) != complex64(v) {
				t.Errorf("line %d, row %d, column %d is %v, want %v", line, row, column, m.At(line, row, column), v)
			}
		}
	})
}

func TestMisfitsAreTheirDefinition(t *testing.T) {
	const line, gain, most = 1, 0.7, 2 // more than half of them reach it
	forSizes(t, func(t *testing.T, q, p int) {
		m, weights := anyMatrices(q, p)
		x, y := complexNoise(q, 3), complexNoise(p, 4)
		products, before := noise(Whole(p), 5), noise(Whole(p), 5)
		m.MultiplyMisfits(products, line, y, x, weights, gain, most)
		for o, r := range y {
			for i, v := range x {
				r -= complex128(m.At(line, o, i)) * v
			}
			t2 := min(most, (real(r)*real(r)+imag(r)*imag(r))*float64(weights[o])*gain)
			// A language product may be fused with the sum, so the last bits may differ.
			if want := before[o] * (1 + t2); math.Abs(products[o]-want) > 1e-12*math.Abs(want) {
				t.Errorf("row %d: %v, want %v", o, products[o], want)
			}
		}
	})
}

func TestMisfitsHaveTheSameBits(t *testing.T) {
	needVector(t)
	forSizes(t, func(t *testing.T, q, p int) {
		for round := range uint64(20) {
			channels := sprinkle(noise(2*(q+p), round), round)
			values := make([]complex128, q+p)
			for i := range values {
				values[i] = complex(channels[2*i], channels[2*i+1])
			}
			x, y := values[:q], values[q:]
			h, weights := singles(sprinkle(noise(2*Whole(p)*q, round+20), round)), singles(sprinkle(noise(Whole(p), round+40), round))
			parameters := []float64{0.7, 1}
			if round%4 == 3 {
				parameters = sprinkle(parameters, round)
			}
			gain, most := parameters[0], parameters[1]
			want := sprinkle(noise(Whole(p), round+60), round)
			got := slices.Clone(want)
			plain.misfit(want, y, x, h, weights, gain, most)
			fastest.misfit(got, y, x, h, weights, gain, most)
			if o := bitsDiffer(got[:p], want[:p]); o >= 0 {
				t.Fatalf("row %d is %v, plain %v", o, got[o], want[o])
			}
		}
	})
}

// TestASilentRowHasNoMisfit: its product keeps its bits, whatever its neighbours do.
func TestASilentRowHasNoMisfit(t *testing.T) {
	const q, silent = 3, 5
	for p := silent + 1; p < silent+6; p++ {
		t.Run(fmt.Sprint(p), func(t *testing.T) {
			m, weights := anyMatrices(q, p)
			for i := range q {
				m.Set(0, silent, i, 0)
			}
			y := complexNoise(p, 4)
			y[silent], y[silent-1] = 0, complex(math.NaN(), math.Inf(1))
			products := noise(Whole(p), 5)
			before := products[silent]
			m.MultiplyMisfits(products, 0, y, complexNoise(q, 3), weights, 1, 1e18)
			if products[silent] != before {
				t.Errorf("%v became %v", before, products[silent])
			}
			if !math.IsNaN(products[silent-1]) {
				t.Errorf("an unknown misfit made %v", products[silent-1])
			}
		})
	}
}

func TestMisfitsAllocateNothing(t *testing.T) {
	m, weights := anyMatrices(2, 7)
	x, y, products := complexNoise(2, 3), complexNoise(7, 4), noise(8, 5)
	for name, l := range map[string]*loops{"plain": &plain, "fast": fastest} {
		if n := testing.AllocsPerRun(20, func() {
			l.misfit(products, y, x, m.values[:m.size()], weights, 1, 2)
			l.logarithms(products[:7])
		}); n != 0 {
			t.Errorf("%s: %v allocations", name, n)
		}
	}
}

func TestMatricesRefuseOtherShapes(t *testing.T) {
	m, weights := anyMatrices(2, 5)
	x, y, products := make([]complex128, 2), make([]complex128, 5), make([]float64, 8)
	for name, call := range map[string]func(){
		"row":      func() { m.Set(0, 5, 0, 1) },
		"column":   func() { m.At(0, 0, 2) },
		"no row":   func() { m.At(1, -1, 0) },
		"line":     func() { m.At(3, 0, 0) },
		"x":        func() { m.MultiplyMisfits(products, 0, y, x[:1], weights, 1, 1) },
		"y":        func() { m.MultiplyMisfits(products, 0, y[:4], x, weights, 1, 1) },
		"products": func() { m.MultiplyMisfits(products[:5], 0, y, x, weights, 1, 1) },
		"weights":  func() { m.MultiplyMisfits(products, 0, y, x, weights[:5], 1, 1) },
		"no line":  func() { m.MultiplyMisfits(products, 3, y, x, weights, 1, 1) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("no panic")
				}
			}()
			call()
		})
	}
}

package estimate

import (
	"math"
	"strings"
	"testing"
)

func TestUndecayed(t *testing.T) {
	names := []string{"S1", "A1z", "A2z"}
	for _, c := range []struct {
		name string
		db   []float64
		fall []float64
		says []string // empty: nothing
	}{
		{"no burst excitation", nil, nil, nil},
		{"all at the limit or below", []float64{-40, -60, math.Inf(-1)}, []float64{9, 9, math.Inf(1)}, nil},
		{"unknown", []float64{math.NaN(), math.NaN(), math.NaN()}, []float64{math.NaN(), math.NaN(), math.NaN()}, nil},
		{"noise does not fall", []float64{-20, -60, -60}, []float64{0.3, 9, 9}, nil},
		{"one", []float64{-60, -39.9, math.NaN()}, []float64{3, 3, math.NaN()}, []string{"A1z has fallen by only 40 dB", "line_spacing"}},
		{"two, the worst is named", []float64{-60, -31.2, -24.6}, []float64{3, 3, 3}, []string{"A2z has fallen by only 25 dB", "and 1 more"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := Decay{EndDB: c.db, FallDB: c.fall}.Undecayed(names)
			if (got == "") != (c.says == nil) {
				t.Fatalf("says %q", got)
			}
			for _, part := range c.says {
				if !strings.Contains(got, part) {
					t.Errorf("says %q, without %q", got, part)
				}
			}
		})
	}
}

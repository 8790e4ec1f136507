package estimate

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestChanceLevels(t *testing.T) {
	for _, test := range []struct {
		name   string
		q      int
		ne     float64
		want   ChanceLevels
		digits float64
	}{
		// From python3 with SciPy 1.10: beta.ppf(.95, q, n-q), beta.ppf(.95, 1, n-q), beta.ppf(.95, q-1, n-q+1).
		{"one force", 1, 20, ChanceLevels{0.145868503312243, 0.145868503312243, math.NaN()}, 1e-9},
		{"two forces", 2, 30, ChanceLevels{0.153392024526183, 0.101465735572725, 0.0981446276772957}, 1e-9},
		{"three forces", 3, 30, ChanceLevels{0.201560587921504, 0.105019230176344, 0.153392024526183}, 1e-9},
		{"four forces", 4, 64, ChanceLevels{0.118498776353836, 0.0487029133100975, 0.0965800112925879}, 1e-9},
		{"overlapped", 2, 9.524, ChanceLevels{0.447987583267396, 0.328443326239324, 0.296330695219181}, 1e-9},
		{"hardly enough", 3, 3.2, ChanceLevels{0.999999922020504, 0.9999996875, 0.956432723791155}, 1e-9},
		{"many", 8, 1000, ChanceLevels{0.0131207957931591, 0.00301533611938678, 0.011819608025916}, 1e-9},
		{"as many as forces", 2, 2, ChanceLevels{math.NaN(), math.NaN(), math.NaN()}, 0},
		{"none", 1, 0, ChanceLevels{math.NaN(), math.NaN(), math.NaN()}, 0},
		{"unknown", 1, math.NaN(), ChanceLevels{math.NaN(), math.NaN(), math.NaN()}, 0},
	} {
		got := NewChanceLevels(test.q, test.ne)
		if !near(got.Multiple, test.want.Multiple, test.digits) || !near(got.Partial, test.want.Partial, test.digits) || !near(got.Force, test.want.Force, test.digits) {
			t.Errorf("%s: %.12g, want %.12g", test.name, got, test.want)
		}
	}
}

// TestChanceIsWhatHappens: of unrelated noise, 5 lines in 100 lie above each level.
func TestChanceIsWhatHappens(t *testing.T) {
	const lines, blocks = 4000, 14
	for _, q := range []int{1, 2, 4} {
		rng := rand.New(rand.NewPCG(31, uint64(q)))
		m := randomMade(rng, lines, q, 1, blocks)
		clear(m.h)
		clear(m.mix)
		for i := range q {
			m.mix[i*q+i] = 1
		}
		e := estimatesOf(m.snapshot(rng), nil)
		for _, test := range []struct {
			name   string
			values []float64
			level  float64
		}{{"multiple", e.MultipleCoherence, e.Chance.Multiple}, {"partial", e.PartialCoherence, e.Chance.Partial}, {"force", e.ForceCoherence, e.Chance.Force}} {
			if test.name == "force" && q == 1 {
				continue // 0 whatever the data
			}
			above := 0.0
			for _, v := range test.values {
				if v > test.level {
					above++
				}
			}
			// Four deviations of a share of 4000; the coherences of one line's forces are not independent.
			if share := above / float64(len(test.values)); math.Abs(share-(1-ChanceLevel)) > 0.014 {
				t.Errorf("q = %d: %.4f of the %s coherences lie above %.4f", q, share, test.name, test.level)
			}
		}
	}
}

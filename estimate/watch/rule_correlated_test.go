package watch

import (
	"slices"
	"testing"
)

func TestCorrelatedBands(t *testing.T) {
	step := func(bands ...[3]float64) func(k int) float64 {
		return func(k int) float64 {
			for _, b := range bands {
				if k >= int(b[0]) && k <= int(b[1]) {
					return b[2]
				}
			}
			return 0
		}
	}
	for _, test := range []struct {
		name   string
		common func(k int) float64
		want   [][2]int // lines
		cause  Cause
	}{
		{"none", step(), nil, ""},
		{"0.25 everywhere", func(int) float64 { return 0.25 }, nil, ""},
		{"0.8 on 40 lines", step([3]float64{100, 139, 0.8}), [][2]int{{100, 139}}, ""},
		{"0.7 on 10, 0.95 on 6 lines", step([3]float64{50, 59, 0.7}, [3]float64{200, 205, 0.95}), [][2]int{{50, 59}, {200, 205}}, ""},
		{"two lines", step([3]float64{100, 101, 0.95}), nil, ""},
		{"hum at 50 Hz", step([3]float64{19, 21, 0.95}), [][2]int{{19, 21}}, CauseMains},
		{"six lines at 50 Hz", step([3]float64{17, 22, 0.95}), [][2]int{{17, 22}}, ""},
	} {
		t.Run(test.name, func(t *testing.T) {
			for seed := range 2 * *manySeeds {
				d := newDrawn(uint64(*firstSeed+seed), 2, 2, 300)
				d.common = test.common
				var got [][2]int
				for _, f := range d.look(16, 24, 36, 54, 80) {
					if f.kind != ForcesCorrelated {
						continue
					}
					if f.cause != test.cause {
						t.Errorf("cause %q, want %q", f.cause, test.cause)
					}
					for _, b := range f.bandsHz {
						got = append(got, [2]int{int(b[0]/drawnSpacingHz + 0.5), int(b[1]/drawnSpacingHz + 0.5)})
					}
				}
				slices.SortFunc(got, func(a, b [2]int) int { return a[0] - b[0] })
				if !slices.EqualFunc(got, test.want, func(a, b [2]int) bool {
					return max(a[0]-b[0], b[0]-a[0], a[1]-b[1], b[1]-a[1]) <= sameEdge
				}) {
					t.Errorf("lines %v, want %v", got, test.want)
				}
			}
		})
	}
}

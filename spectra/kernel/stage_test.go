package kernel

import (
	"slices"
	"testing"
)

func TestFactor(t *testing.T) {
	tests := []struct {
		name string
		n    int
		want []int
		ok   bool
	}{
		{"one point", 1, nil, true},
		{"two", 2, []int{2}, true},
		{"four", 4, []int{4}, true},
		{"eight at once", 8, []int{8}, true},
		{"even power", 1024, []int{4, 4, 4, 4, 4}, true},
		{"odd power", 2048, []int{4, 4, 4, 4, 8}, true},
		{"an odd number", 3375, []int{5, 5, 5, 3, 3, 3}, true},
		{"mixed", 2700, []int{5, 5, 3, 3, 3, 4}, true},
		{"mixed, one two", 30, []int{5, 3, 2}, true},
		{"prime", 7, nil, false},
		{"a seven in it", 28, nil, false},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			got, ok := factor(test.n)
			if ok != test.ok || ok && !slices.Equal(got, test.want) {
				t.Errorf("factor(%d) = %v, %v, want %v, %v", test.n, got, ok, test.want, test.ok)
			}
		})
	}
}

func TestPlacesAreAPermutation(t *testing.T) {
	for _, n := range []int{1, 2, 8, 30, 225, 2048, 2700} {
		radices, _ := factor(n)
		place := places(radices, n)
		slices.Sort(place)
		for i, p := range place {
			if p != i {
				t.Fatalf("%d points: place %d is missing", n, i)
			}
		}
	}
}

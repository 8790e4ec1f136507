package demo

import (
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

func TestAccelerance(t *testing.T) {
	// one mode at 10 rad/s with 5 % damping and shape 2, 3 along x at two points
	s := &structure{points: []string{"a", "b"}, modes: []mode{{10, 0.05, [][3]float64{{2}, {3}}}}}
	for _, c := range []struct {
		name    string
		rateRad float64
		want    complex128
	}{
		{"standstill", 0, 0},
		{"resonance: j phi phi / (2 zeta)", 10, complex(0, 6/(2*0.05))},
		{"far above: phi phi", 1e7, 6},
		{"half way: -25*6/(75 + 5j), by hand", 5, complex(-150*75.0/5650, 150*5.0/5650)},
	} {
		got := s.accelerance(c.rateRad/(2*math.Pi), dof{0, 0}, dof{1, 0})
		if cmplx.Abs(got-c.want) > 1e-5*cmplx.Abs(c.want) {
			t.Errorf("%s: %v: want %v", c.name, got, c.want)
		}
	}
}

func TestFind(t *testing.T) {
	s := &structure{points: []string{"a", "7"}}
	for _, c := range []struct {
		name, point, letter string
		want                dof
		ok                  bool
	}{
		{"there", "7", "y", dof{1, 1}, true},
		{"no such point", "07", "y", dof{}, false},
		{"no such axis", "7", "w", dof{}, false},
		{"axis with its sign", "7", "+z", dof{}, false},
	} {
		if at, ok := s.find(c.point, c.letter); at != c.want || ok != c.ok {
			t.Errorf("%s: %v, %v: want %v, %v", c.name, at, ok, c.want, c.ok)
		}
	}
}

func TestStructureIsReciprocalAndPassive(t *testing.T) {
	s := newSkid()
	rapid.Check(t, func(t *rapid.T) {
		draw := func(label string) dof {
			return dof{rapid.IntRange(0, len(s.points)-1).Draw(t, label), rapid.IntRange(0, 2).Draw(t, label+" axis")}
		}
		o, i := draw("o"), draw("i")
		freqHz := rapid.Float64Range(0.1, 1500).Draw(t, "freqHz")
		ab, ba := s.accelerance(freqHz, o, i), s.accelerance(freqHz, i, o)
		own := s.accelerance(freqHz, o, o)
		// 1e-12 of the driving points: the sum may cancel
		scale := cmplx.Abs(own) + cmplx.Abs(s.accelerance(freqHz, i, i))
		if cmplx.Abs(ab-ba) > 1e-12*scale {
			t.Fatalf("H_oi %v, H_io %v: want the same", ab, ba)
		}
		if imag(own) < 0 {
			t.Fatalf("driving point %v: want no power out of the structure", own)
		}
	})
}

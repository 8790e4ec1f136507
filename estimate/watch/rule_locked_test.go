package watch

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// feed gives k so many blocks of three forces: S1 and S2 share tied of their power on all lines from 100 on, and S2 and
// S3 as much on lines 200 to 259 whatever happens. It returns the findings of each look.
func feed(k *locked, d *drawn, blocks int, tied, physics float64) (found []finding) {
	l := k.layout
	lines := make([]complex128, 400*(l.q+l.p))
	for range blocks {
		for n := range 400 {
			x := lines[n*(l.q+l.p):][:l.q]
			for i := range x {
				x[i] = d.draw()
			}
			if n >= 200 && n < 260 {
				x[2] = complex(math.Sqrt(physics), 0)*x[1] + complex(math.Sqrt(1-physics), 0)*x[2]
			}
			if n >= 100 {
				x[0] = complex(math.Sqrt(tied), 0)*x[1] + complex(math.Sqrt(1-tied), 0)*x[0]
			}
		}
		if k.add(lines) {
			found = k.find(found, 1)
		}
	}
	return found
}

// TestLocked: what the average knows is no news; forces that are tied are, once, with the right ones and where.
func TestLocked(t *testing.T) {
	for _, test := range []struct {
		name          string
		physics, tied float64
		want          bool
	}{
		{"independent", 0, 0, false},
		{"a resonance", 0.9, 0, false},
		{"tied", 0, 0.8, true},
		{"tied over a resonance", 0.9, 0.8, true},
		{"tied a little", 0, 0.1, false},
	} {
		t.Run(test.name, func(t *testing.T) {
			for seed := range 4 * *manySeeds {
				d := newDrawn(uint64(*firstSeed+seed), 3, 3, 400)
				k := newLocked(newLayout(d.rig))
				known := make([]float64, 400*3)
				for n := 200 - k.layout.cells.first; n < 260-k.layout.cells.first; n++ {
					known[n*3+1], known[n*3+2] = test.physics, test.physics
				}
				for n := range known { // an average of 24 blocks gives so much by chance
					known[n] += (1 - known[n]) * 2 / 24
				}
				k.learn(known[:len(k.coherence)], 24)
				if found := feed(k, d, 40, 0, test.physics); found != nil {
					t.Fatalf("before: %+v", found)
				}
				found := feed(k, d, 40, test.tied, test.physics)
				if (found != nil) != test.want {
					t.Fatalf("found %+v, want some: %t", found, test.want)
				}
				if !test.want {
					continue
				}
				f := found[len(found)-1]
				if !slices.Equal(f.channels, []int{0, 1}) && !slices.Equal(f.channels, []int{0, 1, 2}) {
					t.Errorf("channels %v", f.channels)
				}
				lo, hi := f.bandsHz[0][0]/drawnSpacingHz, f.bandsHz[len(f.bandsHz)-1][1]/drawnSpacingHz
				if lo < 92 || lo > 108 || hi < 390 {
					t.Errorf("lines %g to %g", lo, hi)
				}
				for n := range known { // the average follows
					known[n] += 0.7 * (1 - known[n])
				}
				k.learn(known[:len(k.coherence)], 30)
				if found := feed(k, d, 40, test.tied, test.physics); len(found) < 12 {
					t.Errorf("the average followed, and now it is found in %d looks only", len(found))
				}
				for n, f := range found {
					if f.anew && n > 2 {
						t.Errorf("said anew at look %d", n)
					}
				}
				if found := feed(k, d, 40, 0, test.physics); len(found) > 4 {
					t.Errorf("it goes on for %d looks", len(found))
				}
			}
		})
	}
}

// TestOneEventAGroup: on rigs whose structure makes the forces depend on each other nothing began, and at no time more
// than one event of a group stands, hum apart, with two forces at least.
func TestOneEventAGroup(t *testing.T) {
	for seed := range 3 * *manySeeds {
		s := newSimulated(uint64(*firstSeed+seed), simOptions{q: 4, p: 4})
		for i := range s.armature {
			s.armature[i] = 2
		}
		r := newRun(s, nil)
		r.blocks(100)
		r.end()
		standing, most, raised := 0, 0, 0
		for _, e := range r.events {
			if e.Kind != ForcesCorrelated || e.Cause != "" {
				continue
			}
			if strings.Contains(e.Text, "began") {
				t.Errorf("seed %d: %s", *firstSeed+seed, e.Text)
			}
			if len(e.Channels) < 2 {
				t.Errorf("seed %d: %v alone", *firstSeed+seed, e.Channels)
			}
			if e.Edge == Raised {
				standing++
				raised++
			} else {
				standing--
			}
			most = max(most, standing)
			if !slices.IsSortedFunc(e.BandsHz, func(a, b [2]float64) int { return int(a[0] - b[0]) }) {
				t.Errorf("seed %d: %v", *firstSeed+seed, e.BandsHz)
			}
		}
		if raised == 0 || raised > 8 || most > 2 {
			t.Errorf("seed %d: %d raised, up to %d stand\n%s", *firstSeed+seed, raised, most, strings.Join(r.story(), "\n"))
		}
	}
}

func TestGrouped(t *testing.T) {
	band := func(lo int, forces uint64) lineBand { return lineBand{lo: lo, hi: lo + 5, forces: forces} }
	for _, test := range []struct {
		bands []lineBand
		want  string
	}{
		{nil, ""},
		{[]lineBand{band(10, 0b11), band(50, 0b11)}, "11:10,50 "},
		{[]lineBand{band(10, 0b0011), band(50, 0b1100)}, "11:10 1100:50 "},
		{[]lineBand{band(10, 0b0011), band(50, 0b1100), band(30, 0b0110)}, "1111:10,30,50 "},
	} {
		got := ""
		for _, g := range grouped(test.bands) {
			var at []string
			for _, b := range g.bands {
				at = append(at, fmt.Sprint(b.lo))
			}
			got += fmt.Sprintf("%b:%s ", g.forces, strings.Join(at, ","))
		}
		if got != test.want {
			t.Errorf("%v: %q, want %q", test.bands, got, test.want)
		}
	}
}

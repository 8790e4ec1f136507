package demo

import (
	"math"
	"testing"
)

func TestModifiedModes(t *testing.T) {
	s := newSkid()
	set := &setting{}
	source := newDemo(t, Rig(), 1)
	for _, f := range parsed(t, "mode-shift@0s:250=10", "mode-shift@0s:250.0=10", "mode-damping@0s:44=3", "mode-damping@0s:all=0.5") {
		b, err := source.newBroken(f)
		if err != nil {
			t.Fatal(err)
		}
		set.addMechanical(source, b)
	}
	got := set.modified(s)
	for r, m := range skidModes {
		rate, damping := 2*math.Pi*m.frequencyHz, 0.5*m.damping
		switch m.frequencyHz {
		case 248: // nearest to 250
			rate *= 1.1 * 1.1
		case 43.7:
			damping *= 3
		}
		if math.Abs(got.modes[r].rateRad/rate-1) > 1e-12 || math.Abs(got.modes[r].damping/damping-1) > 1e-12 {
			t.Errorf("%g Hz: %g Hz and damping %g: want %g Hz and %g", m.frequencyHz,
				got.modes[r].rateRad/2/math.Pi, got.modes[r].damping, rate/2/math.Pi, damping)
		}
		if s.modes[r].damping != m.damping {
			t.Errorf("%g Hz: the sound structure changed", m.frequencyHz)
		}
	}
	if new(condition).modified(s) != s {
		t.Error("a sound structure was copied")
	}
}

func TestTiltedSensor(t *testing.T) {
	s := newSkid()
	for _, c := range []struct {
		name      string
		axis, mix int
		deg       float64
		own, next float64
	}{
		{"z towards x", 2, 0, 30, math.Sqrt(0.75), 0.5},
		{"y towards z, backwards", 1, 2, -90, 0, -1},
		{"not at all", 0, 1, 0, 1, 0},
	} {
		got := s.tilted(dof{17, c.axis}, c.deg*math.Pi/180)
		for r := range s.modes {
			want := c.own*s.modes[r].at(dof{17, c.axis}) + c.next*s.modes[r].at(dof{17, c.mix})
			if math.Abs(got[r]-want) > 1e-12 {
				t.Errorf("%s, mode %d: %g: want %g", c.name, r, got[r], want)
			}
		}
	}
}

// What is built for a condition, and that equal conditions share it.
func TestPlantsAreShared(t *testing.T) {
	s := faulty(t, Rig(), 1, "detach@1s-2s:S1", "detach@3s-4s:S1", "gain@1.5s-5s:S2", "unhook@3.5s-6s:S2")
	plants := make(map[plant]int)
	for _, turn := range s.turns {
		plants[turn.setting.plant]++
	}
	// sound; S1 off; both off; S2 off
	if len(plants) != 4 || plants[s.sound] != 3 {
		t.Errorf("%d plants, the sound one %d times: want 4, and 3 times", len(plants), plants[s.sound])
	}
}

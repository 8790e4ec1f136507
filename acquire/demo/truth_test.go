package demo

import "testing"

func TestTruthCountsAlongTheAxes(t *testing.T) {
	r := Rig()
	plain, err := NewTruth(r)
	if err != nil {
		t.Fatal(err)
	}
	turn := func(axis string) string {
		if axis[0] == '-' {
			return "+" + axis[1:]
		}
		return "-" + axis[1:]
	}
	const force, response = 1, 4
	for _, c := range []struct {
		name                    string
		turnForce, turnResponse bool
		want                    complex128
	}{
		{"force turned", true, false, -1},
		{"response turned", false, true, -1},
		{"both turned", true, true, 1},
	} {
		r := Rig()
		if c.turnForce {
			r.Forces[force].Axis = turn(r.Forces[force].Axis)
		}
		if c.turnResponse {
			r.Responses[response].Axis = turn(r.Responses[response].Axis)
		}
		turned, err := NewTruth(r)
		if err != nil {
			t.Fatal(err)
		}
		want := c.want * plain.H(100, response, force)
		if got := turned.H(100, response, force); got != want || got == 0 {
			t.Errorf("%s: %v: want %v", c.name, got, want)
		}
		if got, want := turned.H(100, response-1, force-1), plain.H(100, response-1, force-1); got != want {
			t.Errorf("%s: another pair: %v: want %v", c.name, got, want)
		}
	}
}

// At a driving point of the demo, the axis signs of force and response taken into account, power
// flows in and the pair is reciprocal: as the estimates will judge it.
func TestTruthAtTheDrivingPoints(t *testing.T) {
	r := Rig()
	truth, err := NewTruth(r)
	if err != nil {
		t.Fatal(err)
	}
	at := make([]int, len(r.Forces))
	sign := make([]complex128, len(r.Forces))
	for i, f := range r.Forces {
		at[i] = -1
		for o, c := range r.Responses {
			if at[i] < 0 && c.Point == f.Point && c.Letter() == f.Letter() {
				at[i], sign[i] = o, complex(c.Sign()*f.Sign(), 0)
			}
		}
		if at[i] < 0 {
			t.Fatalf("force %s has no driving-point response", f.Name)
		}
	}
	if sign[0] == sign[1] {
		t.Error("no driving point has opposite axis signs: the demo should exercise them")
	}
	lines(r, func(freqHz float64) {
		for i := range r.Forces {
			if h := sign[i] * truth.H(freqHz, at[i], i); imag(h) < 0 {
				t.Errorf("force %s at %g Hz: %v: want power into the structure", r.Forces[i].Name, freqHz, h)
			}
		}
		ab, ba := sign[0]*truth.H(freqHz, at[0], 1), sign[1]*truth.H(freqHz, at[1], 0)
		// 1e-12 m/s² per N: rounding of a sum of terms of at most 10
		if d := ab - ba; real(d)*real(d)+imag(d)*imag(d) > 1e-24 {
			t.Errorf("at %g Hz: %v one way, %v the other", freqHz, ab, ba)
		}
	})
}

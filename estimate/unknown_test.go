package estimate

import (
	"encoding/json"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"shakerwatch/spectra"
)

// known tells which estimates of a snapshot are numbers.
type known struct {
	h, coherence, err, condition, forceCoherence, principal, reciprocity bool
}

func knownOf(e *Estimates) known {
	is := func(v float64) bool { return !math.IsNaN(v) }
	return known{
		h: !cmplx.IsNaN(e.H[0]), coherence: is(e.MultipleCoherence[0]), err: is(e.RandomError[0]),
		condition:      is(e.ForceCondition[0]) && is(e.ForceConditionRaw[0]),
		forceCoherence: is(e.ForceCoherence[0]), principal: is(e.PrincipalForces[0]),
		reciprocity: is(e.ReciprocityError[0]),
	}
}

// TestUnknown goes through the rules for what cannot be known. Two forces with driving points at
// responses 0 and 1.
func TestUnknown(t *testing.T) {
	all := known{true, true, true, true, true, true, true}
	for _, test := range []struct {
		name   string
		blocks int
		change func(*spectra.Snapshot)
		want   known
	}{
		{"no block", 0, nil, known{}},
		{"fewer blocks than forces", 1, nil, known{principal: true}},
		{"as many blocks as forces", 2, nil, known{h: true, condition: true, forceCoherence: true, principal: true, reciprocity: true}},
		{"one more block", 3, nil, all},
		{"one more block, overlapped", 3, func(s *spectra.Snapshot) { s.EffectiveAverages = 2 },
			known{h: true, coherence: true, condition: true, forceCoherence: true, principal: true, reciprocity: true}},
		{"a silent force", 9, func(s *spectra.Snapshot) {
			s.Gxx[1], s.Gxx[2], s.Gxx[3], s.Gyx[1], s.Gyx[3] = 0, 0, 0, 0, 0
		}, known{principal: true}},
		{"forces that are the same", 9, func(s *spectra.Snapshot) {
			s.Gxx[1], s.Gxx[2], s.Gxx[3] = s.Gxx[0], s.Gxx[0], s.Gxx[0]
		}, known{principal: true}},
		{"a silent response", 9, func(s *spectra.Snapshot) { s.Gyx[0], s.Gyx[1], s.Gyy[0] = 0, 0, 0 },
			known{h: true, condition: true, forceCoherence: true, principal: true}},
		{"overflow", 9, func(s *spectra.Snapshot) { s.Gxx[0] = complex(math.Inf(1), 0) }, known{}},
	} {
		t.Run(test.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(1, 2))
			s := randomMade(rng, 1, 2, 2, max(test.blocks, 1)).snapshot(rng)
			if test.blocks == 0 {
				s.Averages, s.EffectiveAverages = 0, 0
				fill(s.Gxx, cmplx.NaN())
				fill(s.Gyx, cmplx.NaN())
				fill(s.Gyy, math.NaN())
			}
			if test.change != nil {
				test.change(s)
			}
			e := estimatesOf(s, []DrivingPoint{{0, 1}, {1, 1}})
			if got := knownOf(e); got != test.want {
				t.Errorf("known are %+v, want %+v", got, test.want)
			}
		})
	}
}

func TestSilentResponseHasNoH(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	s := randomMade(rng, 1, 2, 2, 9).snapshot(rng)
	s.Gyx[0], s.Gyx[1], s.Gyy[0] = 0, 0, 0
	e := estimatesOf(s, nil)
	if e.H[0] != 0 || e.H[1] != 0 {
		t.Errorf("H of a silent response is %v and %v, want 0", e.H[0], e.H[1])
	}
	if cmplx.IsNaN(e.H[2]) || math.IsNaN(e.MultipleCoherence[1]) {
		t.Error("a silent response made another one unknown")
	}
}

func TestOneForce(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	e := estimatesOf(randomMade(rng, 1, 1, 1, 9).snapshot(rng), nil)
	if e.ForceCondition[0] != 1 || e.ForceConditionRaw[0] != 1 || e.ForceCoherence[0] != 0 {
		t.Errorf("one force: condition %v and %v, coherence %v, want 1, 1 and 0",
			e.ForceCondition[0], e.ForceConditionRaw[0], e.ForceCoherence[0])
	}
}

func TestNumberInJSON(t *testing.T) {
	for _, test := range []struct {
		n    Number
		want string
	}{
		{Number(math.NaN()), "null"}, {Number(math.Inf(1)), "null"}, {Number(math.Inf(-1)), "null"},
		{12, "12"}, {0.1, "0.1"}, {-3.25e-12, "-3.25e-12"},
	} {
		if got, err := json.Marshal(test.n); err != nil || string(got) != test.want {
			t.Errorf("%v is written as %s (%v), want %s", float64(test.n), got, err, test.want)
		}
	}
}

package demo

import (
	"encoding/json"
	"math/cmplx"
	"os"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// reference is testdata/reference.json, written by reference.py beside it.
type reference struct {
	FrequencyHz     []float64        `json:"frequency_hz"`
	CurrentToOutput [][][][2]float64 `json:"current_to_output"` // by frequency, output, shaker; in transducer directions
	Accelerance     [][][][2]float64 `json:"accelerance"`       // by frequency, response, force; in transducer directions
	Hold            struct {
		A, B   [][]float64
		StepS  float64 `json:"step_s"`
		AD, BD [][]float64
		DD     [][]float64
	} `json:"hold"`
}

func readReference(t testing.TB) reference {
	t.Helper()
	text, err := os.ReadFile("testdata/reference.json")
	if err != nil {
		t.Fatal(err)
	}
	var r reference
	if err := json.Unmarshal(text, &r); err != nil {
		t.Fatal(err)
	}
	if len(r.FrequencyHz) == 0 || len(r.Hold.A) == 0 {
		t.Fatal("testdata/reference.json lacks something: run reference.py")
	}
	return r
}

// farFrom says whether got is off want by more than 1e-7 of scale: both sides compute mode shapes
// with differences of large numbers, which costs up to nine digits.
func farFrom(got complex128, want [2]float64, scale float64) bool {
	return cmplx.Abs(got-complex(want[0], want[1])) > 1e-7*scale
}

func largest(rows [][][2]float64) float64 {
	var top float64
	for _, row := range rows {
		for _, v := range row {
			top = max(top, cmplx.Abs(complex(v[0], v[1])))
		}
	}
	return top
}

func TestTruthAgainstReference(t *testing.T) {
	ref := readReference(t)
	r := Rig()
	truth, err := NewTruth(r)
	if err != nil {
		t.Fatal(err)
	}
	for k, freqHz := range ref.FrequencyHz {
		scale := largest(ref.Accelerance[k])
		for o := range r.Responses {
			for i := range r.Forces {
				if got, want := truth.H(freqHz, o, i), ref.Accelerance[k][o][i]; farFrom(got, want, scale) {
					t.Errorf("H of %s and %s at %g Hz: %v: want %v",
						r.Responses[o].Name, r.Forces[i].Name, freqHz, got, want)
				}
			}
		}
	}
}

func TestCoupledAgainstReference(t *testing.T) {
	ref := readReference(t)
	r, l := demoLayout(t)
	sys := couple(l.structure, l.shakers, l.sensors)
	for k, freqHz := range ref.FrequencyHz {
		scale := largest(ref.CurrentToOutput[k])
		got := continuous(t, sys, freqHz)
		for o, c := range append(r.Forces, r.Responses...) {
			for i := range r.Forces {
				if got, want := complex(c.Sign(), 0)*got[o][i], ref.CurrentToOutput[k][o][i]; farFrom(got, want, scale) {
					t.Errorf("%s for shaker %d at %g Hz: %v: want %v", c.Name, i+1, freqHz, got, want)
				}
			}
		}
	}
}

func TestTriangleHoldAgainstReference(t *testing.T) {
	hold := readReference(t).Hold
	sys := stateSpace{a: dense(hold.A), b: dense(hold.B)}
	phi, old, fresh := sys.triangleHold(hold.StepS)
	// scipy's state is ours less fresh times the newest input, so that its step takes one input:
	// its B is old + phi fresh, its D (with C the identity) is fresh
	var b mat.Dense
	b.Mul(phi, fresh)
	b.Add(&b, old)
	for _, c := range []struct {
		name      string
		got, want mat.Matrix
	}{
		{"phi", phi, dense(hold.AD)},
		{"old + phi fresh", &b, dense(hold.BD)},
		{"fresh", fresh, dense(hold.DD)},
	} {
		// 1e-12: two exponentials of a matrix of norm 16 in doubles
		if !mat.EqualApprox(c.got, c.want, 1e-12) {
			t.Errorf("%s:\n%v\nwant\n%v", c.name, mat.Formatted(c.got), mat.Formatted(c.want))
		}
	}
}

func dense(rows [][]float64) *mat.Dense {
	m := mat.NewDense(len(rows), len(rows[0]), nil)
	for i, row := range rows {
		m.SetRow(i, row)
	}
	return m
}

package decimate

import (
	"encoding/json"
	"math"
	"os"
	"slices"
	"testing"
)

// reference is what testdata/reference.py found with SciPy's own design, filter and response.
type reference struct {
	Figures []struct {
		D        int
		Factors  []int
		Half     int
		RippleDB float64 `json:"ripple_db"`
		AliasDB  float64 `json:"alias_db"`
		FoldDB   float64 `json:"fold_db"`
	}
	Runs []struct {
		D        int
		Seed     uint64
		Frames   int
		Channels int
		Out      []float64
	}
}

func readReference(t *testing.T) reference {
	t.Helper()
	text, err := os.ReadFile("testdata/reference.json")
	if err != nil {
		t.Fatal(err)
	}
	var r reference
	if err := json.Unmarshal(text, &r); err != nil {
		t.Fatal(err)
	}
	return r
}

func TestFiguresAgreeWithSciPy(t *testing.T) {
	const (
		gridDB  = 0.1  // the two grids meet the top of a side lobe at different points
		exactDB = 0.01 // the same points, but foldedPower subtracts two powers 1e10 times as large
	)
	r := readReference(t)
	if len(r.Figures) != MaxFactor-1 {
		t.Fatalf("%d factors, want %d", len(r.Figures), MaxFactor-1)
	}
	for i, want := range r.Figures {
		d := i + 2
		if want.D != d || !slices.Equal(factors(d), want.Factors) || HalfLength(d) != want.Half {
			t.Errorf("d = %d: factors %v, half length %d; SciPy has d = %d: %v, %d",
				d, factors(d), HalfLength(d), want.D, want.Factors, want.Half)
			continue
		}
		f := measureAll()[d]
		if math.Abs(f.rippleDB-want.RippleDB) > 0.01*want.RippleDB ||
			math.Abs(f.aliasDB-want.AliasDB) > gridDB || math.Abs(f.foldDB-want.FoldDB) > exactDB {
			t.Errorf("d = %d: ripple %g dB, alias %.4f dB, fold %.6f dB; SciPy has %g, %.4f, %.6f",
				d, f.rippleDB, f.aliasDB, f.foldDB, want.RippleDB, want.AliasDB, want.FoldDB)
		}
	}
}

func TestOutputAgreesWithSciPy(t *testing.T) {
	// Sums of up to 10000 products of at most 1, in another order.
	const tolerance = 1e-12
	for _, want := range readReference(t).Runs {
		f := New(want.D, want.Channels)
		out := f.Flush(f.Append(nil, noise(want.Seed, want.Frames*want.Channels)))
		if len(out) != len(want.Out) || len(out) == 0 {
			t.Errorf("d = %d: %d samples, want %d", want.D, len(out), len(want.Out))
			continue
		}
		worst := 0.0
		for i := range out {
			worst = max(worst, math.Abs(out[i]-want.Out[i]))
		}
		t.Logf("d = %d: largest difference %.2g", want.D, worst)
		if !(worst <= tolerance) {
			t.Errorf("d = %d: differs by %g, want at most %g", want.D, worst, tolerance)
		}
	}
}

package web

import (
	"encoding/json"
	"math"
	"testing"

	"pgregory.net/rapid"
)

func TestAppendNumber(t *testing.T) {
	tests := []struct {
		name string
		v    float64
		want string
	}{
		{"zero", 0, "0"},
		{"short ones stay", 0.5, "0.5"},
		{"rounded", 0.123456789, "0.12346"},
		{"coherence near one", 0.999987, "0.99999"},
		{"decibels", -61.23456, "-61.235"},
		{"tiny", 1.23456789e-12, "1.2346e-12"},
		{"large", 1234567, "1.2346e+06"},
		{"unknown", math.NaN(), "null"},
		{"of nothing", math.Inf(-1), "null"},
		{"without bound", math.Inf(1), "null"},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			if got := string(appendNumber(nil, test.v)); got != test.want {
				t.Errorf("%s, want %s", got, test.want)
			}
		})
	}
}

func TestAppendTime(t *testing.T) {
	for v, want := range map[float64]string{0: "0.00", 0.1: "0.10", 86400.25: "86400.25"} {
		if got := string(appendTime(nil, v)); got != want {
			t.Errorf("%s, want %s", got, want)
		}
	}
	if got := string(appendTime(nil, math.NaN())); got != "null" {
		t.Errorf("%s, want null", got)
	}
}

// Rounding to digits digits is off by half a unit of the last one at most.
func TestNumbersComeBackRounded(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		v := rapid.Float64Range(-1e300, 1e300).Draw(t, "v")
		var got float64
		if err := json.Unmarshal(appendNumber(nil, v), &got); err != nil {
			t.Fatal(err)
		}
		normal := math.Abs(v) > 1e-300 // below, the number itself has fewer digits
		if normal && math.Abs(got-v) > 0.5*math.Pow(10, 1-digits)*math.Abs(v)*(1+1e-9) {
			t.Fatalf("%g became %g", v, got)
		}
	})
}

package estimate

import (
	"math"
	"slices"
	"testing"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

func TestMethodOfARig(t *testing.T) {
	r, err := rig.Read("../testdata/estimator_h2/rig.toml")
	if err != nil {
		t.Fatal(err)
	}
	m := MethodOf(r)
	if m.Estimator != H2 || m.NoiseForce != nil || m.NoiseResponse != nil || m.Level != 0 || m.Simultaneous {
		t.Errorf("method %+v", m)
	}
	if want := []DrivingPoint{{0, 1}, {1, 1}}; !slices.Equal(m.Points, want) {
		t.Errorf("driving points %v, want %v", m.Points, want)
	}
	if want := [][2]int{{0, 1}}; !slices.Equal(m.Averaging.Pairs, want) {
		t.Errorf("pairs %v, want %v", m.Averaging.Pairs, want)
	}
	if e := New(ShapeOf(r), m); e.Method.Level != DefaultLevel {
		t.Errorf("level %v, want %v", e.Method.Level, DefaultLevel)
	}
}

func TestMethodsThatGoWithNothing(t *testing.T) {
	shape := spectra.Shape{Lines: 3, Forces: 2, Responses: 2}
	densities := slices.Repeat([]float64{1}, 6)
	for _, test := range []struct {
		name   string
		change func(*spectra.Shape, *Method)
		panics bool
	}{
		{"as it is", func(*spectra.Shape, *Method) {}, false},
		{"a driving point too many", func(_ *spectra.Shape, m *Method) { m.Points = noPoints(3) }, true},
		{"no such estimator", func(_ *spectra.Shape, m *Method) { m.Estimator = "h3" }, true},
		{"h2 with all pairs", func(_ *spectra.Shape, m *Method) { m.Estimator, m.Averaging.Pairs = H2, allPairs(2) }, false},
		{"h2 without pairs", func(_ *spectra.Shape, m *Method) { m.Estimator = H2 }, true},
		{"h2 with more responses than forces", func(s *spectra.Shape, m *Method) {
			s.Responses, m.Estimator, m.Averaging.Pairs = 3, H2, allPairs(3)
		}, true},
		{"noise", func(_ *spectra.Shape, m *Method) { m.NoiseForce, m.NoiseResponse = densities, densities }, false},
		{"noise of the forces alone", func(_ *spectra.Shape, m *Method) { m.NoiseForce = densities }, true},
		{"noise of fewer lines", func(_ *spectra.Shape, m *Method) { m.NoiseForce, m.NoiseResponse = densities, densities[:4] }, true},
		{"certainty", func(_ *spectra.Shape, m *Method) { m.Level = 1 }, true},
		{"level unknown", func(_ *spectra.Shape, m *Method) { m.Level = math.NaN() }, true},
	} {
		t.Run(test.name, func(t *testing.T) {
			s, m := shape, Method{Points: noPoints(2)}
			test.change(&s, &m)
			defer func() {
				if got := recover(); (got != nil) != test.panics {
					t.Errorf("panics with %v", got)
				}
			}()
			New(s, m)
		})
	}
}

func TestUpdateRefusesOtherSnapshots(t *testing.T) {
	shape := spectra.Shape{Lines: 3, Forces: 2, Responses: 2}
	e := New(shape, Method{Points: noPoints(2), Estimator: H2, Averaging: spectra.Averaging{Pairs: allPairs(2)}})
	for name, s := range map[string]*spectra.Snapshot{
		"of another shape": spectra.NewSnapshot(spectra.Shape{Lines: 2, Forces: 2, Responses: 2}, e.Method.Averaging),
		"without pairs":    spectra.NewSnapshot(shape, spectra.Averaging{}),
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("a snapshot %s is taken", name)
				}
			}()
			e.Update(s)
		}()
	}
}

package results

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
	"shakerwatch/estimate/setup"
)

// madeNoise is a noise measurement of r with made-up densities.
func madeNoise(r *rig.Rig) *setup.Noise {
	n := &setup.Noise{}
	for k := range r.Grid.Lines {
		n.FrequencyHz = append(n.FrequencyHz, float64(k)*r.Grid.SpacingHz)
		for i := range r.Forces {
			n.Force = append(n.Force, 1e-6*float64(k+i+1))
			n.MutedForce = append(n.MutedForce, math.NaN())
		}
		for o := range r.Responses {
			n.Response = append(n.Response, 1e-9*float64(k+o+1))
			n.MutedResponse = append(n.MutedResponse, 1e-10)
		}
	}
	return n
}

func writtenNoise(t testing.TB, n *setup.Noise) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := writeNoise(&b, n); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestNoiseComesBack(t *testing.T) {
	r := demo.Rig()
	path := filepath.Join(t.TempDir(), "noise.npz")
	want := madeNoise(r)
	if err := os.WriteFile(path, writtenNoise(t, want), 0o644); err != nil {
		t.Fatal(err)
	}
	n, err := ReadNoise(path, r)
	if err != nil {
		t.Fatal(err)
	}
	got := n.Densities()
	for i, v := range want.Response {
		if got.Response[i] != v {
			t.Fatalf("density %d is %v, want %v", i, got.Response[i], v)
		}
	}
	if !math.IsNaN(got.MutedForce[3]) || got.Force[7] != want.Force[7] || n.Name != path || len(n.SHA256) != 64 {
		t.Errorf("read %v %v %q %q", got.MutedForce[3], got.Force[7], n.Name, n.SHA256)
	}
}

func TestNoiseThatDoesNotFit(t *testing.T) {
	r := demo.Rig()
	other := demo.Rig()
	other.Responses = other.Responses[:5]
	dir := t.TempDir()
	good := writtenNoise(t, madeNoise(r))
	for _, test := range []struct {
		name, want string
		text       []byte
	}{
		{"none.npz", "none.npz", nil},
		{"empty.npz", "no npz file", []byte{}},
		{"text.npz", "no npz file", []byte("quiet")},
		{"cut.npz", "cut.npz", good[:len(good)/2]},
		{"other.npz", "other.npz", writtenNoise(t, madeNoise(other))},
		{"large.npz", "larger", append(bytes.Clone(good), make([]byte, len(good))...)},
	} {
		path := filepath.Join(dir, test.name)
		if test.text != nil {
			if err := os.WriteFile(path, test.text, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		_, err := ReadNoise(path, r)
		if err == nil || !strings.Contains(err.Error(), test.want) || strings.Contains(err.Error(), "\n") {
			t.Errorf("%s: %v, want one line with %q", test.name, err, test.want)
		}
	}
}

func FuzzParseNoise(f *testing.F) {
	r := demo.Rig()
	r.Grid.Lines, r.Responses = 3, r.Responses[:2]
	good := writtenNoise(f, madeNoise(r))
	f.Add(good)
	f.Add(good[:200])
	f.Add([]byte("PK\x03\x04"))
	f.Fuzz(func(t *testing.T, text []byte) {
		n, err := parseNoise(text, 1<<16)
		if err == nil {
			n.Check(r) // must not panic either
		}
	})
}

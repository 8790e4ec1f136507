package wav

import (
	"encoding/json"
	"errors"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"testing"
)

// python is Debian's, for which python3-scipy is installed; without it these tests fail.
const python = "/usr/bin/python3"

// outside is what another program says of a recording.
type outside struct {
	Rate     float64
	Channels int
	Encoding string // by make_recordings.py
	Type     string // by read_back.py
	Warning  bool
	Values   []string // C99 hexadecimal floating point
}

func (o outside) values(t *testing.T) []float64 {
	t.Helper()
	v := make([]float64, len(o.Values))
	for i, text := range o.Values {
		var err error
		if v[i], err = strconv.ParseFloat(text, 64); err != nil {
			t.Fatal(err)
		}
	}
	return v
}

// sameValues compares bits, but takes any NaN for any other: their payload does not pass through text.
func sameValues(t *testing.T, got, want []float64) {
	t.Helper()
	for i := range min(len(got), len(want)) {
		if math.IsNaN(got[i]) && math.IsNaN(want[i]) {
			got[i] = want[i]
		}
	}
	sameBits(t, got, want)
}

func run(t *testing.T, args ...string) []byte {
	t.Helper()
	out, err := exec.Command(python, args...).Output()
	if err != nil {
		if exit, ok := errors.AsType[*exec.ExitError](err); ok {
			t.Fatalf("%s %q: %v\n%s", python, args, err, exit.Stderr)
		}
		t.Fatalf("%s with SciPy is needed for this test: %v", python, err)
	}
	return out
}

// Recordings that other programs made. testdata/make_recordings.py says how; whoever changes it runs
// it on testdata and reads the difference.
func TestRecordingsFromOutside(t *testing.T) {
	fresh := t.TempDir()
	run(t, "testdata/make_recordings.py", fresh)
	for _, c := range []struct {
		name, dir, expected string
		files               int
	}{
		{"committed", "testdata", "expected.json", 17},
		{"made now", fresh, "expected.json", 17},
		{"libsndfile", "testdata", "expected-libsndfile.json", 5},
	} {
		text, err := os.ReadFile(filepath.Join(c.dir, c.expected))
		if err != nil {
			t.Fatal(err)
		}
		var recordings map[string]outside
		if err := json.Unmarshal(text, &recordings); err != nil {
			t.Fatal(err)
		}
		if len(recordings) != c.files {
			t.Errorf("%s: %d recordings, want %d", c.name, len(recordings), c.files)
		}
		for name, want := range recordings {
			t.Run(c.name+"/"+name, func(t *testing.T) {
				r, err := Open(filepath.Join(c.dir, name))
				if err != nil {
					t.Fatal(err)
				}
				defer r.Close()
				if r.RateHz() != want.Rate || r.Channels() != want.Channels || r.Encoding().String() != want.Encoding {
					t.Errorf("%v frames/s, %d channels, %v; want %v, %d, %s",
						r.RateHz(), r.Channels(), r.Encoding(), want.Rate, want.Channels, want.Encoding)
				}
				if (len(r.Warnings()) > 0) != want.Warning {
					t.Errorf("warnings %q, want some: %v", r.Warnings(), want.Warning)
				}
				sameValues(t, drain(t, r), want.values(t))
			})
		}
	}
}

// SciPy reads what the Writer writes, and a script that knows EBU Tech 3306 its RF64.
func TestOthersReadTheWriter(t *testing.T) {
	dir := t.TempDir()
	type made struct {
		channels int
		e        Encoding
		values   []float64
	}
	files := map[string]made{}
	paths := []string{"testdata/read_back.py"}
	for _, e := range []Encoding{Float32, Float64} {
		for _, channels := range []int{1, 2, 3, 9} {
			for name, maxRIFF := range map[string]uint64{"riff": largestRIFF, "rf64": 0} {
				path := filepath.Join(dir, strconv.Itoa(channels)+strconv.Itoa(int(e))+name+".wav")
				_, values := pattern(e, 50*channels)
				copy(values, []float64{math.NaN(), math.Inf(1), math.Copysign(0, -1), 0x1p-149, math.MaxFloat32})
				values = values[:50*channels]
				w := mustCreate(t, path, channels, e)
				w.maxRIFF = maxRIFF
				if err := errors.Join(w.Write(values), w.Close()); err != nil {
					t.Fatal(err)
				}
				files[path] = made{channels, e, values}
				paths = append(paths, path)
			}
		}
	}
	var found map[string]outside
	if err := json.Unmarshal(run(t, paths...), &found); err != nil {
		t.Fatal(err)
	}
	typeOf := map[Encoding]string{Float32: "float32", Float64: "float64"}
	for path, want := range files {
		got := found[path]
		if got.Rate != testRate || got.Channels != want.channels || got.Type != typeOf[want.e] {
			t.Errorf("%s: rate %v, %d channels, %s; want %v, %d, %s", filepath.Base(path), got.Rate, got.Channels, got.Type, testRate, want.channels, typeOf[want.e])
		}
		sameValues(t, got.values(t), want.values)
	}
}

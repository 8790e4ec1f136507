package estimate

import (
	"encoding/json"
	"io"
	"math"
	"math/cmplx"
	"os"
	"path/filepath"
	"testing"

	"github.com/sbinet/npyio/npz"

	"shakerwatch/acquire/rig"
	"shakerwatch/acquire/wav"
	"shakerwatch/spectra"
)

// referenceTolerance is relative to each array's largest value: NumPy and we both have a rounding error
// of some 1e-15 times the condition of the forces, below 1000 in all cases.
const referenceTolerance = 1e-9

// TestReferences compares the estimates of every recording of testdata with those of NumPy and
// SciPy (testdata/README.md), from the blocks that the reference lists.
func TestReferences(t *testing.T) {
	rigFiles, err := filepath.Glob(filepath.Join("..", "testdata", "*", "rig.toml"))
	if err != nil || len(rigFiles) < 20 {
		t.Fatalf("%d reference cases (%v)", len(rigFiles), err)
	}
	for _, rigFile := range rigFiles {
		dir := filepath.Dir(rigFile)
		t.Run(filepath.Base(dir), func(t *testing.T) {
			r, err := rig.Read(rigFile)
			if err != nil {
				t.Fatal(err)
			}
			facts := referenceFacts(t, dir)
			m := MethodOf(r)
			m.Level, m.Simultaneous = facts.Confidence.Level, facts.Confidence.Simultaneous
			e := New(ShapeOf(r), m)
			e.Update(averaged(t, r, dir, facts.BlockStarts))
			compareWithReference(t, filepath.Join(dir, "expected.npz"), e)
			facts.compareChance(t, e.Chance)
		})
	}
}

// averaged is the snapshot of the blocks of a reference case.
func averaged(t *testing.T, r *rig.Rig, dir string, starts []int64) *spectra.Snapshot {
	shape, channels, block := ShapeOf(r), r.Channels(), r.Grid.Block
	frames, width := recording(t, filepath.Join(dir, "run.wav"))
	window := spectra.Window(r.Analysis.Window).Values(block)
	transform := spectra.NewTransform(window)
	average := spectra.NewAverage(shape, window, r.Grid.Hop, r.Grid.Decimation, r.Grid.RateHz, AveragingOf(r))
	lines, samples := make([]complex128, shape.Lines*len(channels)), make([]float64, block)
	for _, start := range starts {
		for n, c := range channels {
			for i := range samples {
				samples[i] = frames[(int(start)+i)*width+c.Index] * c.Scale()
			}
			transform.ChannelTo(lines, n, len(channels), samples)
		}
		average.Sum([][]complex128{lines}, 0, shape.Lines)
		average.Count(start)
	}
	s := spectra.NewSnapshot(shape, AveragingOf(r))
	average.SnapshotTo(s)
	return s
}

func recording(t *testing.T, path string) (frames []float64, channels int) {
	file, err := wav.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	channels = file.Channels()
	frames = make([]float64, int(file.Frames())*channels)
	for at := 0; at < len(frames); {
		n, err := file.Read(frames[at:])
		if err != nil {
			t.Fatal(err)
		}
		at += n * channels
	}
	return frames, channels
}

// facts are what expected.json says of a case.
type facts struct {
	BlockStarts []int64 `json:"block_starts"`
	Confidence  struct {
		Level        float64
		Simultaneous bool
	}
	ChanceLevel struct {
		Probability float64
		Multiple    *float64 `json:"multiple_coherence"`
		Partial     *float64 `json:"partial_coherence"`
		Force       *float64 `json:"force_coherence"`
	} `json:"chance_level"`
}

func referenceFacts(t *testing.T, dir string) facts {
	text, err := os.ReadFile(filepath.Join(dir, "expected.json"))
	if err != nil {
		t.Fatal(err)
	}
	var f facts
	if err := json.Unmarshal(text, &f); err != nil {
		t.Fatal(err)
	}
	if f.Confidence.Level == 0 || f.ChanceLevel.Probability != ChanceLevel {
		t.Fatalf("expected.json lacks something: confidence %+v, chance %+v", f.Confidence, f.ChanceLevel)
	}
	return f
}

func (f facts) compareChance(t *testing.T, got ChanceLevels) {
	for _, v := range []struct {
		name string
		got  float64
		want *float64
	}{
		{"multiple", got.Multiple, f.ChanceLevel.Multiple}, {"partial", got.Partial, f.ChanceLevel.Partial},
		{"force", got.Force, f.ChanceLevel.Force},
	} {
		want := math.NaN()
		if v.want != nil {
			want = *v.want
		}
		if !near(v.got, want, referenceTolerance) {
			t.Errorf("chance level of %s coherence: %v, want %v", v.name, v.got, want)
		}
	}
}

func compareWithReference(t *testing.T, path string, e *Estimates) {
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	size, err := file.Seek(0, io.SeekEnd)
	if err != nil {
		t.Fatal(err)
	}
	reference, err := npz.NewReader(file, size)
	if err != nil {
		t.Fatal(err)
	}
	compareArray(t, reference, "H", e.H, cmplx.Abs)
	for name, got := range map[string][]float64{
		"multiple_coherence": e.MultipleCoherence, "partial_coherence": e.PartialCoherence,
		"random_error": e.RandomError, "confidence_radius": e.ConfidenceRadius,
		"force_condition": e.ForceCondition, "force_condition_raw": e.ForceConditionRaw,
		"force_coherence": e.ForceCoherence, "principal_forces": e.PrincipalForces,
		"reciprocity_error": e.ReciprocityError, "frequency": e.FrequencyHz,
	} {
		compareArray(t, reference, name, got, math.Abs)
	}
}

func compareArray[T float64 | complex128](t *testing.T, reference *npz.Reader, name string, got []T, abs func(T) float64) {
	var want []T
	if err := reference.Read(name+".npy", &want); err != nil {
		t.Errorf("%s: %v", name, err)
		return
	}
	if len(got) != len(want) {
		t.Errorf("%s has %d values, want %d", name, len(got), len(want))
		return
	}
	var largest float64
	for _, w := range want {
		if w == w {
			largest = max(largest, abs(w))
		}
	}
	for i, w := range want {
		if g := got[i]; (g == g) != (w == w) || w == w && !(abs(g-w) <= referenceTolerance*largest) {
			t.Errorf("%s[%d] = %v, want %v (the largest is %v)", name, i, g, w, largest)
			return
		}
	}
}

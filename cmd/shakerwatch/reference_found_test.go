package main

import (
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// TestFoundReferences replays every recording whose blocks the program finds by itself. The blocks
// must be the true ones, and all results those of NumPy and SciPy for the blocks as they were found
// (testdata/README.md).
func TestFoundReferences(t *testing.T) {
	cases, err := filepath.Glob(filepath.Join(testdata, "found", "*", "rig.toml"))
	if err != nil || len(cases) < 11 {
		t.Fatalf("%d cases of blocks that are found (%v)", len(cases), err)
	}
	for _, rigFile := range cases {
		dir := filepath.Dir(rigFile)
		t.Run(filepath.Base(dir), func(t *testing.T) {
			t.Parallel()
			recording := filepath.Join(dir, "run.wav")
			out := filepath.Join(t.TempDir(), "results")
			status, _, stderr := shakerwatch(t, "replay", rigFile, recording, "--headless", "--out", out)
			if status != exitDone {
				t.Fatalf("exit status %d: %s", status, stderr)
			}
			summary := filepath.Join(out, "summary.json")
			starts := numbers(t, readJSON(t, summary)["block_starts"])
			for _, wrong := range wrongStarts(starts, trueStarts(t, dir)) {
				t.Error(wrong)
			}
			if len(starts) == 0 {
				return
			}
			expected := foundReference(t, rigFile, recording, summary)
			compareArrays(t, filepath.Join(out, "estimates.npz"), filepath.Join(expected, "expected.npz"))
			compareSummary(t, summary, filepath.Join(expected, "expected.json"))
		})
	}
}

// foundReference computes what the blocks of a summary have to give, and returns the folder that
// holds it.
func foundReference(t *testing.T, rigFile, recording, summary string) string {
	t.Helper()
	dir := t.TempDir()
	script := filepath.Join(testdata, "found.py")
	out, err := exec.Command("/usr/bin/python3", script, rigFile, recording, summary, dir).CombinedOutput()
	if err != nil {
		t.Fatalf("found.py: %v\n%s(it needs Debian's python3-scipy)", err, out)
	}
	return dir
}

// A span is where a block may start, both frames among them.
type span struct{ earliest, latest float64 }

// trueStarts are the spans of a case, one a block that is to be found.
func trueStarts(t *testing.T, dir string) []span {
	t.Helper()
	truth, ok := readJSON(t, filepath.Join(dir, "truth.json"))["starts"].([]any)
	if !ok || len(truth) == 0 {
		t.Fatalf("%s: truth.json has no starts", dir)
	}
	var spans []span
	for _, pair := range truth {
		ends := numbers(t, pair)
		if len(ends) != 2 {
			t.Fatalf("%s: truth.json: %v is no pair", dir, pair)
		}
		spans = append(spans, span{ends[0], ends[1]})
	}
	return spans
}

func numbers(t *testing.T, v any) []float64 {
	t.Helper()
	list, ok := v.([]any)
	if !ok {
		t.Fatalf("%v is no list of numbers", v)
	}
	var values []float64
	for _, item := range list {
		value, ok := item.(float64)
		if !ok {
			t.Fatalf("%v is no number", item)
		}
		values = append(values, value)
	}
	return values
}

// wrongStarts says which blocks were missed and which were found where there is none. Both lists
// grow.
func wrongStarts(starts []float64, truth []span) []string {
	var wrong []string
	for len(starts) > 0 || len(truth) > 0 {
		switch {
		case len(starts) == 0 || len(truth) > 0 && truth[0].latest < starts[0]:
			wrong = append(wrong, fmt.Sprintf("no block starts at frames %v to %v", truth[0].earliest, truth[0].latest))
			truth = truth[1:]
		case len(truth) == 0 || starts[0] < truth[0].earliest:
			wrong = append(wrong, fmt.Sprintf("a block starts at frame %v, where none does", starts[0]))
			starts = starts[1:]
		default:
			starts, truth = starts[1:], truth[1:]
		}
	}
	return wrong
}

func TestWrongStarts(t *testing.T) {
	truth := []span{{10, 20}, {100, 100}, {150, 160}}
	for _, c := range []struct {
		name   string
		starts []float64
		want   string
	}{
		{"all at the earliest", []float64{10, 100, 150}, ""},
		{"all at the latest", []float64{20, 100, 160}, ""},
		{"none", nil, "no block starts at frames 10 to 20; no block starts at frames 100 to 100; no block starts at frames 150 to 160"},
		{"one missed", []float64{15, 155}, "no block starts at frames 100 to 100"},
		{"one too many in front", []float64{3, 15, 100, 155}, "a block starts at frame 3, where none does"},
		{"one too many behind", []float64{15, 100, 155, 170}, "a block starts at frame 170, where none does"},
		{"twice", []float64{15, 16, 100, 155}, "a block starts at frame 16, where none does"},
		{"one frame early", []float64{9, 100, 155}, "a block starts at frame 9, where none does; no block starts at frames 10 to 20"},
		{"one frame late", []float64{15, 101, 155}, "no block starts at frames 100 to 100; a block starts at frame 101, where none does"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := strings.Join(wrongStarts(c.starts, truth), "; "); got != c.want {
				t.Errorf("got %q, want %q", got, c.want)
			}
		})
	}
}

// TestFoundReferenceNeedsTheStarts breaks one start: the reference must not give the same.
func TestFoundReferenceNeedsTheStarts(t *testing.T) {
	dir := filepath.Join(testdata, "found", "burst_trigger")
	made := func(shift float64) string {
		var starts []string
		for i, s := range trueStarts(t, dir) {
			if i == 0 {
				s.latest += shift
			}
			starts = append(starts, fmt.Sprint(s.latest))
		}
		summary := filepath.Join(t.TempDir(), "summary.json")
		text := fmt.Sprintf(`{"block_starts": [%s]}`, strings.Join(starts, ", "))
		if err := os.WriteFile(summary, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		return foundReference(t, filepath.Join(dir, "rig.toml"), filepath.Join(dir, "run.wav"), summary)
	}
	right, wrong := made(0), made(-1)
	for _, key := range []string{"Gxx.npy", "H.npy", "drift.npy", "decay_db.npy"} {
		if fmt.Sprint(anyArray(t, right, key)) == fmt.Sprint(anyArray(t, wrong, key)) {
			t.Errorf("%s is the same for a block that starts one frame early", key)
		}
	}
}

func anyArray(t *testing.T, dir, key string) any {
	t.Helper()
	r := openNPZ(t, filepath.Join(dir, "expected.npz"))
	if r.Header(key).Descr.Type == "<c16" {
		return readArray[complex128](t, r, key)
	}
	return readArray[float64](t, r, key)
}

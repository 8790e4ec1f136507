package main

import (
	"archive/zip"
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"math"
	"math/cmplx"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"

	"github.com/sbinet/npyio/npz"
)

const testdata = "../../testdata"

// shakerwatch runs the program and returns its exit status, standard output and standard error.
func shakerwatch(t testing.TB, args ...string) (status int, stdout, stderr string) {
	t.Helper()
	return shakerwatchUntil(t.Context(), args...)
}

func shakerwatchUntil(ctx context.Context, args ...string) (status int, stdout, stderr string) {
	var out, errs bytes.Buffer
	status = run(ctx, args, strings.NewReader(""), &out, &errs)
	return status, out.String(), errs.String()
}

// tolerance of arrays against NumPy and SciPy, relative to each array's largest value: both have a
// rounding error of some 1e-15 times the condition of the forces, below 1000 in all cases.
const tolerance = 1e-9

// TestReferences replays every recording of testdata and compares all results with those of NumPy
// and SciPy (testdata/README.md).
func TestReferences(t *testing.T) {
	cases, err := filepath.Glob(filepath.Join(testdata, "*", "rig.toml"))
	if err != nil || len(cases) < 20 {
		t.Fatalf("%d reference cases (%v)", len(cases), err)
	}
	for _, rigFile := range cases {
		dir := filepath.Dir(rigFile)
		name := filepath.Base(dir)
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			out := filepath.Join(t.TempDir(), "results")
			args := []string{"replay", rigFile, filepath.Join(dir, "run.wav"), "--headless", "--out", out}
			status, _, stderr := shakerwatch(t, append(args, confidenceFlags(t, dir)...)...)
			if status != exitDone {
				t.Fatalf("exit status %d: %s", status, stderr)
			}
			compareArrays(t, filepath.Join(out, "estimates.npz"), filepath.Join(dir, "expected.npz"))
			compareSummary(t, filepath.Join(out, "summary.json"), filepath.Join(dir, "expected.json"))
		})
	}
}

// confidenceFlags ask for the confidence region of a case. Nothing is asked for where the case has
// the usual one: 90 %, for one frequency response at a time.
func confidenceFlags(t *testing.T, dir string) []string {
	t.Helper()
	want, ok := readJSON(t, filepath.Join(dir, "expected.json"))["confidence"].(map[string]any)
	if !ok {
		t.Fatalf("%s: expected.json says nothing about confidence", dir)
	}
	var flags []string
	if want["level"] != 0.9 {
		flags = append(flags, "--confidence", fmt.Sprint(want["level"]))
	}
	if want["simultaneous"] == true {
		flags = append(flags, "--simultaneous")
	}
	return flags
}

// compareArrays compares every array of two npz files: names, shapes, which values are unknown,
// and values to the tolerance.
func compareArrays(t *testing.T, gotPath, wantPath string) {
	t.Helper()
	got, want := openNPZ(t, gotPath), openNPZ(t, wantPath)
	if g, w := memberNames(t, gotPath), memberNames(t, wantPath); !slices.Equal(g, w) {
		t.Errorf("arrays %v, want %v", g, w)
	}
	for _, key := range want.Keys() {
		g, w := got.Header(key), want.Header(key)
		if g == nil || g.Descr.Type != w.Descr.Type || g.Descr.Fortran || !slices.Equal(g.Descr.Shape, w.Descr.Shape) {
			t.Errorf("%s: header %v, want %v", key, g, w)
			continue
		}
		switch w.Descr.Type {
		case "<f8":
			compareValues(t, key, readArray[float64](t, got, key), readArray[float64](t, want, key), math.Abs, math.IsNaN)
		case "<c16":
			compareValues(t, key, readArray[complex128](t, got, key), readArray[complex128](t, want, key), cmplx.Abs, cmplx.IsNaN)
		case "<i8":
			if g, w := readArray[int64](t, got, key), readArray[int64](t, want, key); !slices.Equal(g, w) {
				t.Errorf("%s: %v, want %v", key, g, w)
			}
		default:
			t.Errorf("%s: unexpected type %s", key, w.Descr.Type)
		}
	}
}

func compareValues[T float64 | complex128](t *testing.T, key string, got, want []T, abs func(T) float64, isNaN func(T) bool) {
	t.Helper()
	var largest float64
	for _, w := range want {
		if !isNaN(w) && !math.IsInf(abs(w), 0) {
			largest = max(largest, abs(w))
		}
	}
	for i, w := range want {
		g := got[i]
		if g == w {
			continue // also when infinite
		}
		if isNaN(g) != isNaN(w) || !isNaN(w) && !(abs(g-w) <= tolerance*largest) {
			t.Errorf("%s[%d] = %v, want %v (the largest is %v)", key, i, g, w, largest)
			return
		}
	}
}

func openNPZ(t *testing.T, path string) *npz.Reader {
	t.Helper()
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { file.Close() })
	info, err := file.Stat()
	if err != nil {
		t.Fatal(err)
	}
	r, err := npz.NewReader(file, info.Size())
	if err != nil {
		t.Fatalf("%s: %v", path, err)
	}
	return r
}

func memberNames(t *testing.T, path string) []string {
	t.Helper()
	archive, err := zip.OpenReader(path)
	if err != nil {
		t.Fatal(err)
	}
	defer archive.Close()
	var names []string
	for _, f := range archive.File {
		names = append(names, f.Name)
	}
	slices.Sort(names)
	return names
}

func readArray[T any](t *testing.T, r *npz.Reader, key string) []T {
	t.Helper()
	n := 1
	for _, d := range r.Header(key).Descr.Shape {
		n *= d
	}
	values := make([]T, n)
	if n == 0 {
		return values
	}
	if err := r.Read(key, &values); err != nil {
		t.Fatalf("%s: %v", key, err)
	}
	return values
}

// compareSummary compares what the reference knows of summary.json with what was written.
func compareSummary(t *testing.T, gotPath, wantPath string) {
	t.Helper()
	got, want := readJSON(t, gotPath), readJSON(t, wantPath)
	for key, w := range want {
		if diff := difference(got[key], w); diff != "" {
			t.Errorf("summary %s: %s", key, diff)
		}
	}
}

func readJSON(t *testing.T, path string) map[string]any {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var v map[string]any
	if err := json.Unmarshal(text, &v); err != nil {
		t.Fatalf("%s: %v", path, err)
	}
	return v
}

// difference says how got differs from want, numbers to the tolerance; empty is not at all.
func difference(got, want any) string {
	if w, ok := want.(map[string]any); ok {
		g, ok := got.(map[string]any)
		if !ok {
			return fmt.Sprintf("%v, want %v", got, want)
		}
		for key := range w {
			if diff := difference(g[key], w[key]); diff != "" {
				return key + ": " + diff
			}
		}
		return ""
	}
	if w, ok := want.(float64); ok {
		if g, ok := got.(float64); ok && math.Abs(g-w) <= tolerance*math.Abs(w) {
			return ""
		}
	}
	if !reflect.DeepEqual(got, want) {
		return fmt.Sprintf("%v, want %v", got, want)
	}
	return ""
}

package results

import (
	"bytes"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// TestNumPyReadsIt has Debian's NumPy load an npz file with every type and odd shapes, pickling
// refused, and print what it holds.
func TestNumPyReadsIt(t *testing.T) {
	arrays := []array{
		{"a", []int{2, 3}, []float64{1, 2.5, -3, 0, math.NaN(), 1e-300}},
		{"b", []int{1, 1, 2}, []complex128{complex(1, -2), complex(0, math.NaN())}},
		{"pairs", []int{0, 2}, []int64{}},
		{"n", []int{}, []float64{94.79}},
		{"i", []int{1, 2}, []int64{-1, 1 << 40}},
	}
	var b bytes.Buffer
	if err := writeNPZ(&b, arrays); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "x.npz")
	if err := os.WriteFile(path, b.Bytes(), 0o644); err != nil {
		t.Fatal(err)
	}
	const script = `
import sys, numpy
z = numpy.load(sys.argv[1], allow_pickle=False)
for k in z.files:
    v = z[k]
    print(k, v.dtype.str, v.shape, v.flags["C_CONTIGUOUS"], v.ravel().tolist())
`
	out, err := exec.Command("/usr/bin/python3", "-c", script, path).CombinedOutput()
	if err != nil {
		t.Fatalf("Debian's NumPy: %v\n%s(install python3-numpy)", err, out)
	}
	want := strings.Join([]string{
		"a <f8 (2, 3) True [1.0, 2.5, -3.0, 0.0, nan, 1e-300]",
		"b <c16 (1, 1, 2) True [(1-2j), nanj]",
		"pairs <i8 (0, 2) True []",
		"n <f8 () True [94.79]",
		"i <i8 (1, 2) True [-1, 1099511627776]",
	}, "\n")
	if got := strings.TrimSpace(string(out)); got != want {
		t.Errorf("NumPy reads\n%s\nwant\n%s", got, want)
	}

	var again bytes.Buffer
	if err := writeNPZ(&again, arrays); err != nil || !bytes.Equal(b.Bytes(), again.Bytes()) {
		t.Errorf("the same arrays give other bytes (%v)", err)
	}
}

func TestValuesAreAlignedForNumPy(t *testing.T) {
	for _, shape := range [][]int{{}, {1}, {1601, 14, 2}, {123456789, 2}} {
		if n := len(npyHeader("<c16", shape)); n%64 != 0 {
			t.Errorf("shape %v: values begin at byte %d, no multiple of 64", shape, n)
		}
	}
}

func TestEveryNaNIsTheSame(t *testing.T) {
	var a, b bytes.Buffer
	other := math.Float64frombits(0xfff8_0000_0000_0001)
	writeNPZ(&a, []array{{"x", []int{1}, []float64{math.NaN()}}})
	writeNPZ(&b, []array{{"x", []int{1}, []float64{other}}})
	if !bytes.Equal(a.Bytes(), b.Bytes()) {
		t.Error("two kinds of NaN give other bytes")
	}
}

func TestShapeAndValuesMustAgree(t *testing.T) {
	if err := writeNPZ(&bytes.Buffer{}, []array{{"x", []int{2}, []float64{1}}}); err == nil {
		t.Error("one value was written as two")
	}
}

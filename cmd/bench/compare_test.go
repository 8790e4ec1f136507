package main

import (
	"bytes"
	"io"
	"math"
	"os"
	"testing"
)

// TestMain is the program's contestant where the command line asks for it, as main is.
func TestMain(m *testing.M) {
	if len(os.Args) > 1 && os.Args[1] == programWord {
		exit(program(os.Args[2:], os.Stdin, os.Stdout))
	}
	os.Exit(m.Run())
}

// smallSizes take seconds together, and have what the standard ones lack: one force, channels that
// fill no group, blocks that are no power of two.
var smallSizes = []struct {
	name string
	size size
}{
	{"usual", size{2, 6, 256}},
	{"one force", size{1, 2, 128}},
	{"odd numbers", size{3, 4, 240}},
}

// newBench prepares one for a size, and the recording.
func newBench(t *testing.T, s size) *bench {
	t.Helper()
	o, err := parse([]string{"--turn", "1ms", "--cores", "2"})
	if err != nil {
		t.Fatal(err)
	}
	if err := lookForTools(t.Context(), o.python); err != nil {
		t.Fatal(err)
	}
	b := &bench{options: o, size: s, dir: t.TempDir()}
	if err := writeRecording(b.recording(), s, b.blocks()); err != nil {
		t.Fatal(err)
	}
	return b
}

// TestThreeAgree has every way of NumPy and of C give the same densities as the program.
func TestThreeAgree(t *testing.T) {
	for _, c := range smallSizes {
		t.Run(c.name, func(t *testing.T) {
			b := newBench(t, c.size)
			program, err := b.programWay()
			if err != nil {
				t.Fatal(err)
			}
			numpyWays, err := b.numpyWays()
			if err != nil {
				t.Fatal(err)
			}
			limitWays := allLimitWays(t, b)
			for i := range max(len(numpyWays), len(limitWays)) {
				n, l := numpyWays[i%len(numpyWays)], limitWays[i%len(limitWays)]
				for other, apart := range apartAfterJobs(t, b, [contestants]way{program, n, l}) {
					if !(apart <= tolerance) {
						t.Errorf("%s with NumPy by %s and C by %s: %.1e apart", names[other], n.name, l.name, apart)
					}
				}
			}
		})
	}
}

// allLimitWays are all layouts, with one and with several blocks together.
func allLimitWays(t *testing.T, b *bench) (ways []way) {
	t.Helper()
	group := 1
	for b.size.channels()%(2*group) == 0 && group < 8 {
		group *= 2
	}
	program, err := buildLimit(t.Context(), b.dir, b.size, group)
	if err != nil {
		t.Fatal(err)
	}
	for _, in := range []string{"frames", "channels"} {
		for _, out := range []string{"lines", "channels"} {
			for _, together := range []int{1, 16} {
				ways = append(ways, b.limitWay(limitWay{program, group, in, out, together, passive}))
			}
		}
	}
	return ways
}

// apartAfterJobs compares the contestants' densities after two jobs, the second on top of what the
// first one left.
func apartAfterJobs(t *testing.T, b *bench, ways [contestants]way) [contestants]float64 {
	t.Helper()
	var running [contestants]*contestant
	for i, w := range ways {
		c, err := start(t.Context(), w.env, w.argv(b.blocks())...)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := c.jobs(2); err != nil {
			t.Fatal(err)
		}
		running[i] = c
	}
	apart, err := compare(b.size, running)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range running {
		if err := c.close(); err != nil {
			t.Error(err)
		}
	}
	return apart
}

func TestCompareArray(t *testing.T) {
	for _, c := range []struct {
		name  string
		other []float64
		want  float64
	}{
		{"equal", []float64{1, -4, 2, 0}, 0},
		{"one differs", []float64{1, -4, 2, 0.5}, 0.125},
		{"largest differs", []float64{1, 4, 2, 0}, 2},
		{"unknown", []float64{1, math.NaN(), 2, 0}, math.NaN()},
	} {
		t.Run(c.name, func(t *testing.T) {
			same := appendFloats(nil, []float64{1, -4, 2, 0})
			apart, err := compareArray([contestants]io.Reader{
				bytes.NewReader(same), bytes.NewReader(same), bytes.NewReader(appendFloats(nil, c.other)),
			}, 2, 2)
			if err != nil {
				t.Fatal(err)
			}
			if got := apart[limits]; apart[numpys] != 0 || got != c.want && !(math.IsNaN(got) && math.IsNaN(c.want)) {
				t.Errorf("%v apart, want 0, 0 and %v", apart, c.want)
			}
			r := &result{size: aimSize, apart: apart}
			if (r.disagreement() == nil) != (c.want == 0) {
				t.Errorf("disagreement %v", r.disagreement())
			}
		})
	}
}

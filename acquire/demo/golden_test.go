package demo

import (
	"bytes"
	"flag"
	"fmt"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "write the golden files anew; read what changed")

// The demo that people know stays as it is: whatever is added to the simulation and switched off
// leaves every sample alone. The file was written before there was anything to switch on.
func TestDemoIsWhatItWas(t *testing.T) {
	const path, frames = "testdata/golden.csv", 24
	r := Rig()
	got := read(t, newDemo(t, r, 1), frames)
	if *update {
		var text bytes.Buffer
		for i, v := range got {
			end := ","
			if (i+1)%r.Source.Channels == 0 {
				end = "\n"
			}
			fmt.Fprintf(&text, "%v%s", float32(v), end)
		}
		if err := os.WriteFile(path, text.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	want := strings.FieldsFunc(string(text), func(c rune) bool { return c == ',' || c == '\n' })
	if len(want) != len(got) {
		t.Fatalf("%s holds %d samples: want %d", path, len(want), len(got))
	}
	for i, field := range want {
		v, err := strconv.ParseFloat(field, 64)
		if err != nil {
			t.Fatalf("%s: %v", path, err)
		}
		// 1e-7: processors may fuse multiply and add, and a float32 below 1 has steps of 6e-8
		if math.Abs(got[i]-v) > 1e-7 {
			t.Fatalf("frame %d, channel %d: %v: want %v", i/r.Source.Channels, i%r.Source.Channels+1, got[i], v)
		}
	}
}

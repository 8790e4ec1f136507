package demo

import (
	"io"
	"slices"
	"strings"
	"testing"

	"shakerwatch/acquire/internal/sourcetest"
)

func TestLostFrames(t *testing.T) {
	const end = 4000
	for _, c := range []struct {
		name  string
		texts []string
		want  [][2]int64 // frames of each stretch that is lost
	}{
		{"amount", []string{"lost@1s=100"}, [][2]int64{{2560, 2660}}},
		{"end, with another fault inside", []string{"lost@1s-1.1s", "reverse@1.05s:S1"}, [][2]int64{{2560, 2816}}},
		{"two that touch", []string{"lost@1s=100", "lost@1.0390625s=40"}, [][2]int64{{2560, 2700}}},
		{"first frames, and usual", []string{"lost@0s", "lost@0.5s=1"}, [][2]int64{{0, 256}, {1280, 1281}}},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, maxFrames := range []int{1, 700} {
				lost := int64(0)
				for _, gap := range c.want {
					lost += gap[1] - gap[0]
				}
				s := &head{faulty(t, Rig(), 1, c.texts...), end - int(lost)}
				stretches, err := sourcetest.Drain(t, s, maxFrames)
				if err != io.EOF {
					t.Fatal(err)
				}
				sound := read(t, newDemo(t, Rig(), 1), end)
				var at int64
				var gaps [][2]int64
				for _, part := range stretches {
					if part.Lost > 0 {
						gaps = append(gaps, [2]int64{at, at + part.Lost})
						at += part.Lost
						continue
					}
					if !strings.Contains(c.name, "another") && !slices.Equal(part.Samples, sound[at*16:int(at)*16+len(part.Samples)]) {
						t.Errorf("from frame %d other samples than without a loss", at)
					}
					at += int64(len(part.Samples) / 16)
				}
				if !slices.Equal(gaps, c.want) {
					t.Errorf("lost %v: want %v", gaps, c.want)
				}
			}
		})
	}
}

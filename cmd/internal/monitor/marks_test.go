package monitor

import (
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// TestMarks compares with a plain list of marked frames.
func TestMarks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		var m marks
		var frames []int64
		at := int64(0)
		for range rapid.IntRange(0, 12).Draw(t, "stretches") {
			at += rapid.Int64Range(0, 3).Draw(t, "apart")
			n := rapid.Int64Range(1, 4).Draw(t, "long")
			m.add(at, at+n)
			for f := at; f < at+n; f++ {
				frames = append(frames, f)
			}
			at += n
		}
		forgotten := rapid.Int64Range(0, at).Draw(t, "forgotten")
		m.forget(forgotten)
		from := rapid.Int64Range(forgotten, at+2).Draw(t, "from")
		before := from + rapid.Int64Range(1, 5).Draw(t, "width")
		want := slices.ContainsFunc(frames, func(f int64) bool { return f >= from && f < before })
		if s, got := m.in(from, before); got != want || got && (s.from >= before || s.before <= from) {
			t.Fatalf("a mark in [%d, %d) is %v as %+v, want %v", from, before, got, s, want)
		}
		if n := len(m.spans); n > 1 && m.spans[n-2].before >= m.spans[n-1].from {
			t.Fatalf("stretches that touch are kept apart: %v", m.spans)
		}
	})
}

func TestLongLossIsOneStretch(t *testing.T) {
	var m marks
	for at := range int64(100_000) {
		m.add(at, at+1)
	}
	if len(m.spans) != 1 {
		t.Errorf("%d stretches, want 1", len(m.spans))
	}
}

package web

import (
	"fmt"
	"testing"
)

// BenchmarkRefresh is what one refresh costs: taking it in, and making the message of one view. The views
// are those of a page on a screen of 1280 by 720 that shows the top of its plots, of one of 1920 by 1080,
// and of everything at once on the largest.
func BenchmarkRefresh(b *testing.B) {
	screens := []struct {
		name   string
		points int
		parts  []string
	}{
		{"1280", 400, []string{"coherence", "independence", "response"}},
		{"1920", 600, []string{"coherence", "independence", "response", "map", "forces", "reciprocity"}},
		{"all", mostPoints, nil},
	}
	for _, size := range []struct{ q, p, lines int }{{2, 14, 1601}, {8, 504, 801}} {
		f := newFeed(b, size.q, size.p, size.lines)
		h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
		f.add(size.q + 4)
		st, e := f.refresh(h)
		for _, screen := range screens {
			b.Run(fmt.Sprintf("%dx%dx%d/%s", size.q, size.p, size.lines, screen.name), func(b *testing.B) {
				v := h.first
				v.shown, v.points = shown(1), h.shape.roundPoints(screen.points)
				if screen.parts != nil {
					v.parts, _ = h.shape.choose(screen.parts)
				}
				b.ReportAllocs()
				bytes := 0
				for b.Loop() {
					h.Refresh(st, e)
					text, _ := h.results.message(v)
					bytes = len(text)
				}
				b.ReportMetric(float64(bytes), "bytes/refresh")
			})
		}
	}
}

// BenchmarkAnotherView is what each further view of the same refresh costs.
func BenchmarkAnotherView(b *testing.B) {
	f := newFeed(b, 8, 504, 801)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	f.add(12)
	f.refresh(h)
	v := h.first
	h.results.message(v)
	n := 0
	for b.Loop() {
		n++
		v.response, v.force = n%504, n/504%8
		h.results.message(v)
		delete(h.results.views, v)
	}
}

func BenchmarkLevels(b *testing.B) {
	f := newFeed(b, 8, 504, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "demo", Saves: true})
	l := f.levels(1, -1)
	for b.Loop() {
		h.PublishLevels(l)
	}
}

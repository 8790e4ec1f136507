package web

import (
	"fmt"
	"testing"
)

// BenchmarkRefresh is what one refresh costs: taking it in, and making the message of one view.
func BenchmarkRefresh(b *testing.B) {
	for _, size := range []struct{ q, p, lines int }{{2, 14, 1601}, {8, 504, 801}} {
		b.Run(fmt.Sprintf("%dx%dx%d", size.q, size.p, size.lines), func(b *testing.B) {
			f := newFeed(b, size.q, size.p, size.lines)
			h := NewHub(f.rig, "demo", true)
			f.add(size.q + 4)
			st, e := f.refresh(h)
			v := h.first
			v.shown = shown(1)
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

// BenchmarkAnotherView is what each further view of the same refresh costs.
func BenchmarkAnotherView(b *testing.B) {
	f := newFeed(b, 8, 504, 801)
	h := NewHub(f.rig, "demo", true)
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
	h := NewHub(f.rig, "demo", true)
	l := f.levels(1, -1)
	for b.Loop() {
		h.PublishLevels(l)
	}
}

package soundcard

import (
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// Against a plain slice, whatever is done in whatever order.
func TestHeldKeepsOrder(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		h := newHeld(rapid.IntRange(1, 40).Draw(t, "size"))
		var free, kept []float32
		next := float32(0)
		t.Repeat(map[string]func(*rapid.T){
			"put in": func(t *rapid.T) {
				most := rapid.IntRange(1, 50).Draw(t, "most")
				room := h.room(most)
				if size := len(h.ring) - len(free) - len(kept); len(room) > min(most, size) || (len(room) == 0) != (size == 0) {
					t.Fatalf("room for %d of %d", len(room), size)
				}
				n := rapid.IntRange(0, len(room)).Draw(t, "n")
				for i := range n {
					room[i] = next
					kept = append(kept, next)
					next++
				}
				h.keep(n)
			},
			"drop": func(t *rapid.T) {
				n := rapid.IntRange(0, len(kept)).Draw(t, "n")
				h.drop(n)
				kept = kept[len(kept)-n:]
			},
			"release": func(t *rapid.T) {
				n := rapid.IntRange(0, 50).Draw(t, "n")
				h.release(n)
				k := max(0, len(kept)-n)
				free = append(free, kept[:k]...)
				kept = kept[k:]
			},
			"take": func(t *rapid.T) {
				dst := make([]float64, rapid.IntRange(0, 50).Draw(t, "n"))
				n := h.take(dst)
				if n != min(len(dst), len(free)) {
					t.Fatalf("took %d into %d, of %d", n, len(dst), len(free))
				}
				for i, v := range dst[:n] {
					if v != float64(free[i]) {
						t.Fatalf("took %v, want %v", dst[:n], free[:n])
					}
				}
				free = slices.Clone(free[n:])
			},
			"": func(t *rapid.T) {
				if h.free != len(free) || h.kept != len(kept) {
					t.Fatalf("%d free and %d kept, want %d and %d", h.free, h.kept, len(free), len(kept))
				}
			},
		})
	})
}

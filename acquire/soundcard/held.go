package soundcard

// held is a ring of samples, all counts in samples. The last ones put in are held back until it is
// clear whether they follow those before without loss.
type held struct {
	ring  []float32
	first int // the place of the next to be taken
	free  int // how many may be taken
	kept  int // how many behind these are held back
}

func newHeld(samples int) held { return held{ring: make([]float32, samples)} }

// room is the place for what comes next, at most so long, empty when the ring is full.
func (h *held) room(most int) []float32 {
	begin := h.place(h.free + h.kept)
	return h.ring[begin:][:min(most, len(h.ring)-begin, len(h.ring)-h.free-h.kept)]
}

// keep puts in, held back, the first n that were written into room.
func (h *held) keep(n int) { h.kept += n }

// drop takes out those that are held back but the last n.
func (h *held) drop(n int) {
	for i := range n {
		h.ring[h.place(h.free+i)] = h.ring[h.place(h.free+h.kept-n+i)]
	}
	h.kept = n
}

// release lets all be taken but the last n, or fewer if there are fewer.
func (h *held) release(n int) {
	n = min(n, h.kept)
	h.free += h.kept - n
	h.kept = n
}

// take moves into dst as many as may be taken and fit, and returns how many.
func (h *held) take(dst []float64) int {
	n := min(len(dst), h.free)
	for i := range n {
		dst[i] = float64(h.ring[h.place(i)])
	}
	h.first = h.place(n)
	h.free -= n
	return n
}

// place is that of the sample that comes i behind the next one; 0 <= i <= len(h.ring).
func (h *held) place(i int) int {
	i += h.first
	if i >= len(h.ring) {
		i -= len(h.ring)
	}
	return i
}

package spectra

// halves keep copies of an average's sums as they were after s and 2s blocks, s a power of two, so
// that any number of blocks can be parted near the middle. From 2s to 4s blocks the part that is
// nearer to half of them serves: neither part is ever below a third.
type halves struct {
	kept   [2]sums // after counts[0] and counts[1] blocks
	counts [2]int
}

func newHalves(shape Shape, pairs int) *halves {
	return &halves{kept: [2]sums{newSums(shape, pairs), newSums(shape, pairs)}}
}

// wants tells whether the sums after n blocks are to be kept.
func (h *halves) wants(n int) bool { return n&(n-1) == 0 }

// keep copies the sums after n blocks over the older copy.
func (h *halves) keep(s sums, n int) {
	h.kept[0], h.kept[1] = h.kept[1], h.kept[0]
	h.counts[0] = h.counts[1]
	h.kept[1].copyFrom(s)
	h.counts[1] = n
}

// first are the sums of the first part of n blocks and how many are in it: 0 below two blocks.
func (h *halves) first(n int) (*sums, int) {
	best := 0
	if 2*n >= 3*h.counts[1] { // n is nearer to twice the newer copy's count
		best = 1
	}
	return &h.kept[best], h.counts[best]
}

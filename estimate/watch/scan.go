package watch

// A scan finds the windows of lines in which a response departs from the average, in the last block
// alone and in the last few together.
type scan struct {
	layout *layout
	limits [][]windowLimit // (number of blocks, size)

	recent []*sums // newest last, those of blocks that were normal by themselves
	spare  []*sums
	now    []float64 // (o, cell)

	result []reading  // by response
	worker []prefixes // scratch
	each   func(items int, do func(worker, item int))
	one    func(worker, item int)
}

// sums are those of u of one block.
type sums struct {
	block int64
	u     []float64 // (o, cell)
}

// A windowLimit is for windows of one size.
type windowLimit struct {
	cells, step  int
	limit, ended float64 // ended: of the window that ends with the last cell, which holds more lines
}

// A reading is what a scan found for one response.
type reading struct {
	blocks int     // fewest blocks, 1, 2 or 4, that show it; 0: normal
	excess float64 // of the sum of u over all lines in the newest block, above its mean
	fresh  bool    // the newest block shows it too, where the sums do
}

// windowCells are the sizes: 16, 64 and 256 lines; that of all lines comes behind them.
var windowCells = []int{2, 8, 32}

// blockCounts are over how many of the last blocks is summed.
var blockCounts = [...]int{1, 2, longest}

func newScan(l *layout, workers int, each func(items int, do func(worker, item int))) *scan {
	s := &scan{layout: l, result: make([]reading, l.p), now: make([]float64, l.p*l.cells.n), each: each}
	for range workers {
		var p prefixes
		for b := range p {
			p[b] = make([]float64, l.cells.n+1)
		}
		s.worker = append(s.worker, p)
	}
	for range longest {
		s.spare = append(s.spare, &sums{u: make([]float64, l.p*l.cells.n)})
	}
	s.one = s.scanOne
	return s
}

// learn computes the limits for S known from v + q averages.
func (s *scan) learn(v float64) {
	s.limits = s.limits[:0]
	for _, blocks := range blockCounts {
		var row []windowLimit
		for _, size := range windowCells {
			if size < s.layout.cells.n {
				row = append(row, s.window(size, max(1, size/2), blocks, v))
			}
		}
		s.limits = append(s.limits, append(row, s.window(s.layout.cells.n, 1, blocks, v)))
	}
}

func (s *scan) window(size, step, blocks int, v float64) windowLimit {
	c, cells := s.layout.between, s.layout.cells
	return windowLimit{size, step, c.limit(cells.judged(size, false), blocks, v), c.limit(cells.judged(size, true), blocks, v)}
}

// scan reads now, of the given block, and tells whether all responses are normal.
func (s *scan) scan() (normal bool) {
	s.each(s.layout.p, s.one)
	for _, r := range s.result {
		if r.blocks > 0 {
			return false
		}
	}
	return true
}

// lastOf is the sums of the block j blocks ago, 1 being the newest that is kept.
func (s *scan) lastOf(j int) *sums { return s.recent[len(s.recent)-j] }

func (s *scan) scanOne(worker, o int) {
	n := s.layout.cells.n
	prefix := &s.worker[worker]
	r := &s.result[o]
	*r = reading{}
	u := s.now[o*n : (o+1)*n]
	known := s.together(prefix, o)
	prefix.sumUp()
	r.excess = prefix[0][n] - float64(s.layout.cells.judged(n, true))
	for b, blocks := range blockCounts[:known] {
		if hit, lo, hi := exceeding(prefix[b], s.limits[b]); hit {
			r.blocks = blocks
			r.fresh = freshIn(u[lo:hi], s.layout.cells.judged(hi-lo, hi == n))
			return
		}
	}
}

// together puts into dst what the cells of response o hold in the last blocks together, from the second place on, for
// those counts of blocks, as many as it returns, for which there are enough.
func (s *scan) together(dst *prefixes, o int) (known int) {
	n := s.layout.cells.n
	copy(dst[0][1:], s.now[o*n:(o+1)*n])
	for known = 1; known < len(blockCounts) && blockCounts[known]-1 <= len(s.recent); known++ {
		to := dst[known][1:]
		copy(to, dst[known-1][1:])
		for j := blockCounts[known-1]; j < blockCounts[known]; j++ {
			for c, v := range s.lastOf(j).u[o*n:][:len(to)] {
				to[c] += v
			}
		}
	}
	return known
}

// prefixes are, for each count of blocks, the sums over all cells before one: from 0 to all.
type prefixes [len(blockCounts)][]float64

// sumUp makes prefixes of the cells' own sums, which stand from the second place on. All counts go side by side, for each
// sum waits for the one before it.
func (p *prefixes) sumUp() {
	a, b, c := p[0], p[1][:len(p[0])], p[2][:len(p[0])]
	a[0], b[0], c[0] = 0, 0, 0
	var sumA, sumB, sumC float64
	for n := range a {
		sumA += a[n]
		sumB += b[n]
		sumC += c[n]
		a[n], b[n], c[n] = sumA, sumB, sumC
	}
}

func (s *scan) addRecent(prefix, u []float64) {
	var sum float64
	for c, v := range u {
		sum += v
		prefix[c+1] += sum
	}
}

// freshIn tells whether the newest block has a part in what a window shows.
func freshIn(u []float64, lines int) bool {
	var sum float64
	for _, v := range u {
		sum += v
	}
	return sum > leastMean*float64(lines)
}

// exceeding is the window that exceeds its limit by the largest factor. In nearly all readings there is none, which is
// soon seen.
func exceeding(prefix []float64, limits []windowLimit) (hit bool, lo, hi int) {
	for _, w := range limits {
		if w.exceeded(prefix) {
			return worst(prefix, limits)
		}
	}
	return false, 0, 0
}

// exceeded tells whether any window of this size exceeds its limit.
func (w windowLimit) exceeded(prefix []float64) bool {
	ends := prefix[w.cells:]
	last := len(ends) - 1
	for at := 0; at < last; at += w.step {
		if ends[at]-prefix[at] > w.limit {
			return true
		}
	}
	return ends[last]-prefix[last] > w.ended
}

// worst is exceeding in full.
func worst(prefix []float64, limits []windowLimit) (hit bool, lo, hi int) {
	n := len(prefix) - 1
	most := 1.0
	for _, w := range limits {
		for at := 0; ; at += w.step {
			at = min(at, n-w.cells)
			limit := w.limit
			if at == n-w.cells {
				limit = w.ended
			}
			if sum := prefix[at+w.cells] - prefix[at]; sum > most*limit {
				most, hit, lo, hi = sum/limit, true, at, at+w.cells
			}
			if at == n-w.cells {
				break
			}
		}
	}
	return hit, lo, hi
}

// mark sets, in dst by cell, the cells of response o that lie in a window of 16 lines which exceeds its limit over the
// number of blocks that show it, and tells their share. Where only wider windows do, the mean that is abnormal at
// least decides.
func (s *scan) mark(dst []bool, o int) (share float64) {
	n := s.layout.cells.n
	clear(dst)
	r := s.result[o]
	if r.blocks == 0 {
		return 0
	}
	prefix := s.worker[0][0]
	clear(prefix)
	s.addRecent(prefix, s.now[o*n:(o+1)*n])
	b := 0
	for ; blockCounts[b] < r.blocks; b++ {
	}
	for j := 1; j < r.blocks; j++ {
		s.addRecent(prefix, s.lastOf(j).u[o*n:(o+1)*n])
	}
	w := s.limits[b][0]
	marked := markWindows(dst, prefix, w)
	if marked == 0 {
		w.limit = leastMean * float64(r.blocks*s.layout.cells.judged(w.cells, false))
		w.ended = w.limit
		marked = markWindows(dst, prefix, w)
	}
	return float64(marked) / float64(n)
}

func markWindows(dst []bool, prefix []float64, w windowLimit) (marked int) {
	n := len(dst)
	for at := 0; at+w.cells <= n; at++ {
		limit := w.limit
		if at == n-w.cells {
			limit = w.ended
		}
		if prefix[at+w.cells]-prefix[at] > limit {
			for c := at; c < at+w.cells; c++ {
				dst[c] = true
			}
		}
	}
	for _, set := range dst {
		if set {
			marked++
		}
	}
	return marked
}

// singly tells whether the block is normal by itself.
func (s *scan) singly() bool {
	for _, r := range s.result {
		if r.blocks == 1 {
			return false
		}
	}
	return true
}

// since is the oldest block that a reading of several blocks takes in.
func (s *scan) since(block int64) int64 {
	first := block
	for _, r := range s.result {
		if r.blocks > 1 {
			first = min(first, s.lastOf(r.blocks-1).block)
		}
	}
	return first
}

// keep remembers the sums of a block that was normal by itself for those to come.
func (s *scan) keep(block int64) {
	var kept *sums
	if len(s.spare) > 0 {
		kept, s.spare = s.spare[len(s.spare)-1], s.spare[:len(s.spare)-1]
	} else {
		kept = s.recent[0]
		s.recent = s.recent[:copy(s.recent, s.recent[1:])]
	}
	kept.block = block
	kept.u, s.now = s.now, kept.u
	s.recent = append(s.recent, kept)
}

// forget drops the sums of earlier blocks.
func (s *scan) forget() {
	s.spare = append(s.spare, s.recent...)
	s.recent = s.recent[:0]
}

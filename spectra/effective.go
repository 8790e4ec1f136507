package spectra

// Effective counts the independent averages that overlapped blocks are worth:
//
//	n_e = M² / Σ_ab rho(s_a - s_b)²
//
// over the M blocks with starts s, rho being OverlapCorrelation. Without missing blocks it is
// Welch's formula (IEEE Trans. Audio Electroacoust. AU-15, 1967); with them it is the same
// variance argument for the pairs that are there.
type Effective struct {
	hop    int64     // source frames between neighbouring blocks of the grid
	rho2   []float64 // rho² of blocks 1, 2, ... hops apart, while they overlap
	recent []int64   // starts of the last len(rho2) blocks, a ring
	n      int64     // blocks so far
	sum    float64   // Σ_ab rho²
}

// NewEffective makes an empty count for blocks weighted by window's values on a grid of hop
// analysis samples, each sample worth decimation source frames.
func NewEffective(window []float64, hop, decimation int) *Effective {
	e := &Effective{hop: int64(hop) * int64(decimation)}
	for lag := hop; lag < len(window); lag += hop {
		rho := OverlapCorrelation(window, lag)
		e.rho2 = append(e.rho2, rho*rho)
	}
	e.recent = make([]int64, len(e.rho2))
	return e
}

// Add counts a block that starts at the given source frame, a multiple of the hop behind all
// others.
func (e *Effective) Add(start int64) {
	e.sum++
	size := int64(len(e.recent))
	for back := int64(1); back <= min(size, e.n); back++ {
		hops := (start - e.recent[(e.n-back)%size]) / e.hop
		if hops > size {
			break // blocks further back are further away still
		}
		e.sum += 2 * e.rho2[hops-1]
	}
	if size > 0 {
		e.recent[e.n%size] = start
	}
	e.n++
}

// Averages is n_e, 0 while there is no block.
func (e *Effective) Averages() float64 {
	if e.n == 0 {
		return 0
	}
	return float64(e.n) * float64(e.n) / e.sum
}

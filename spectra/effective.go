package spectra

// Effective counts the independent averages that overlapped blocks are worth:
//
//	n_e = M² / Σ_ab rho(s_a - s_b)²
//
// over the M blocks with starts s, rho being OverlapCorrelation. Without missing blocks it is
// Welch's formula (IEEE Trans. Audio Electroacoust. AU-15, 1967); with them it is the same
// variance argument for the pairs that are there. With weights w it is
// (Σ w)² / Σ_ab w_a w_b rho².
type Effective struct {
	hop    int64     // source frames between neighbouring blocks of the grid
	rho2   []float64 // rho² of blocks 1, 2, ... hops apart, while they overlap
	recent []int64   // starts of the last len(rho2) blocks, a ring
	n      int64     // blocks so far
	decay  float64   // of all earlier weights with each block
	weight float64   // Σ w
	sum    float64   // Σ_ab w_a w_b rho²
}

// NewEffective makes an empty count for blocks weighted by window's values on a grid of hop
// analysis samples, each sample worth decimation source frames. A hop of 0 is for blocks that never
// overlap. decay is by how much the weight of all earlier blocks falls with each block: 1 is a plain mean.
func NewEffective(window []float64, hop, decimation int, decay float64) *Effective {
	e := &Effective{hop: int64(hop) * int64(decimation), decay: decay}
	for lag := hop; hop > 0 && lag < len(window); lag += hop {
		rho := OverlapCorrelation(window, lag)
		e.rho2 = append(e.rho2, rho*rho)
	}
	e.recent = make([]int64, len(e.rho2))
	return e
}

// Add counts a block that starts at the given source frame, a multiple of the hop behind all
// others.
func (e *Effective) Add(start int64) {
	e.weight = e.decay*e.weight + 1
	e.sum = e.decay*e.decay*e.sum + 1
	size := int64(len(e.recent))
	age := 1.0
	for back := int64(1); back <= min(size, e.n); back++ {
		age *= e.decay
		hops := (start - e.recent[(e.n-back)%size]) / e.hop
		if hops > size {
			break // blocks further back are further away still
		}
		e.sum += 2 * age * e.rho2[hops-1]
	}
	if size > 0 {
		e.recent[e.n%size] = start
	}
	e.n++
}

func (e *Effective) reset() { e.n, e.weight, e.sum = 0, 0, 0 }

// Weight is Σ w: the number of blocks of a plain mean.
func (e *Effective) Weight() float64 { return e.weight }

// Averages is n_e, 0 while there is no block.
func (e *Effective) Averages() float64 {
	if e.n == 0 {
		return 0
	}
	return e.weight * e.weight / e.sum
}

package spectra

// Densities are averaged products as one-sided densities. Arrays lie line by line; q, p and P are
// the numbers of forces, responses and kept pairs of responses.
type Densities struct {
	Gxx      []complex128 // (line, i, j) N²/Hz, Hermitian to the last bit
	Gyx      []complex128 // (line, o, i) N·m/s²/Hz
	Gyy      []float64    // (line, o) (m/s²)²/Hz
	GyyPairs []complex128 // (line, pair) E[Y_o Y_n*] of the pairs (o, n) that Averaging asks for
}

func newDensities(shape Shape, pairs int) Densities {
	return Densities{
		Gxx:      make([]complex128, shape.Lines*shape.Forces*shape.Forces),
		Gyx:      make([]complex128, shape.Lines*shape.Responses*shape.Forces),
		Gyy:      make([]float64, shape.Lines*shape.Responses),
		GyyPairs: make([]complex128, shape.Lines*pairs),
	}
}

// A Snapshot is an average at one moment, as densities, all NaN without blocks. Whoever receives
// one reads it only; the goroutine that had it made decides when its memory is used again.
type Snapshot struct {
	Shape
	Averaging
	SpacingHz float64 // line k lies at k·SpacingHz
	Densities

	Averages          int     // blocks in the average, M
	EffectiveAverages float64 // n_e, see Effective
	Starts            Starts  // the list of blocks

	// Noise are densities of the noise in one period, from the scatter between the periods of each
	// random block. Empty unless Averaging.Periods says that there are any.
	Noise Densities

	// Early and Late are the averages of the first and of the other blocks, parted near the middle.
	// Empty unless Averaging.Halves asks for them; without blocks while there are fewer than two.
	Early, Late Part
}

// A Part is an average of some of the blocks.
type Part struct {
	Densities
	Averages          int
	EffectiveAverages float64
}

// NewSnapshot makes a snapshot with room for an average of the given shape.
func NewSnapshot(shape Shape, averaging Averaging) *Snapshot {
	s := &Snapshot{Shape: shape, Averaging: averaging, Densities: newDensities(shape, len(averaging.Pairs))}
	if averaging.Periods > 0 {
		s.Noise = newDensities(shape, len(averaging.Pairs))
	}
	if averaging.Halves {
		s.Early.Densities = newDensities(shape, len(averaging.Pairs))
		s.Late.Densities = newDensities(shape, len(averaging.Pairs))
	}
	return s
}

// FrequencyHz is where line k lies.
func (s *Snapshot) FrequencyHz(k int) float64 { return float64(k) * s.SpacingHz }

// SnapshotTo writes the average's present state into dst. It panics when dst has another shape.
func (a *Average) SnapshotTo(dst *Snapshot) {
	if dst.Shape != a.shape || len(dst.Gxx) != len(a.sums.gxx) || len(dst.GyyPairs) != len(a.sums.pairs) {
		panic("spectra: snapshot and average differ in shape")
	}
	dst.SpacingHz = a.spacingHz
	dst.Averages = a.starts.Len()
	dst.EffectiveAverages = a.effective.Averages()
	a.starts.copyTo(&dst.Starts)
	a.densitiesTo(&dst.Densities, a.sums, nil, a.effective.Weight())
	if len(dst.Noise.Gxx) > 0 {
		// Of K periods, K - 1 deviations from their mean are free.
		a.densitiesTo(&dst.Noise, a.scatter, nil, float64(dst.Averages*(a.averaging.Periods-1)))
	}
	if len(dst.Early.Gxx) > 0 {
		a.partsTo(dst)
	}
}

// partsTo fills dst.Early and dst.Late.
func (a *Average) partsTo(dst *Snapshot) {
	first, n := a.halves.first(dst.Averages)
	dst.Early.Averages, dst.Late.Averages = n, dst.Averages-n
	for _, part := range []*Part{&dst.Early, &dst.Late} {
		part.EffectiveAverages = dst.EffectiveAverages * float64(part.Averages) / float64(dst.Averages)
	}
	if n == 0 {
		return
	}
	a.densitiesTo(&dst.Early.Densities, *first, nil, float64(n))
	a.densitiesTo(&dst.Late.Densities, a.sums, first, float64(dst.Late.Averages))
}

// densitiesTo writes sums, less those of less unless it is nil, over weight. A weight of 0 makes every density
// 0/0, which is NaN as it should be.
func (a *Average) densitiesTo(dst *Densities, s sums, less *sums, weight float64) {
	q, p, pairs := a.shape.Forces, a.shape.Responses, len(a.averaging.Pairs)
	if less == nil {
		less = &a.nothing
	}
	for k, scale := range a.scale {
		for i := range q {
			for j := range i + 1 {
				n := (k*q+i)*q + j
				v := mean(s.gxx, less.gxx, n, scale, weight)
				dst.Gxx[n] = v
				dst.Gxx[(k*q+j)*q+i] = complex(real(v), -imag(v))
			}
		}
		for n := k * p * q; n < (k+1)*p*q; n++ {
			dst.Gyx[n] = mean(s.gyx, less.gyx, n, scale, weight)
		}
		for n := k * pairs; n < (k+1)*pairs; n++ {
			dst.GyyPairs[n] = mean(s.pairs, less.pairs, n, scale, weight)
		}
		for n := k * p; n < (k+1)*p; n++ {
			sum := s.gyy[n]
			if len(less.gyy) > 0 {
				sum -= less.gyy[n]
			}
			dst.Gyy[n] = sum * scale / weight
		}
	}
}

func mean(sums, less []complex128, n int, scale, weight float64) complex128 {
	sum := sums[n]
	if len(less) > 0 {
		sum -= less[n]
	}
	return complex(real(sum)*scale/weight, imag(sum)*scale/weight)
}

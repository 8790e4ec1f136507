package spectra

// A Snapshot is an average at one moment, as densities. Whoever receives one reads it only; the
// goroutine that had it made decides when its memory is used again.
type Snapshot struct {
	Shape
	SpacingHz float64      // line k lies at k·SpacingHz
	Gxx       []complex128 // (line, i, j) N²/Hz, Hermitian to the last bit; NaN without blocks
	Gyx       []complex128 // (line, o, i) N·m/s²/Hz; NaN without blocks
	Gyy       []float64    // (line, o) (m/s²)²/Hz; NaN without blocks

	Averages          int     // blocks in the average, M
	EffectiveAverages float64 // n_e, see Effective
	Starts            Starts  // the list of blocks
}

// NewSnapshot makes a snapshot with room for an average of the given shape.
func NewSnapshot(shape Shape) *Snapshot {
	return &Snapshot{
		Shape: shape,
		Gxx:   make([]complex128, shape.Lines*shape.Forces*shape.Forces),
		Gyx:   make([]complex128, shape.Lines*shape.Responses*shape.Forces),
		Gyy:   make([]float64, shape.Lines*shape.Responses),
	}
}

// FrequencyHz is where line k lies.
func (s *Snapshot) FrequencyHz(k int) float64 { return float64(k) * s.SpacingHz }

// SnapshotTo writes the average's present state into dst. It panics when dst has another shape.
func (a *Average) SnapshotTo(dst *Snapshot) {
	if dst.Shape != a.shape {
		panic("spectra: snapshot and average differ in shape")
	}
	dst.SpacingHz = a.spacingHz
	dst.Averages = a.starts.Len()
	dst.EffectiveAverages = a.effective.Averages()
	a.starts.copyTo(&dst.Starts)

	q, p := a.shape.Forces, a.shape.Responses
	m := float64(dst.Averages) // 0 makes every density 0/0, which is NaN as it should be
	for k, scale := range a.scale {
		for i := range q {
			for j := range i + 1 {
				v := mean(a.gxx[(k*q+i)*q+j], scale, m)
				dst.Gxx[(k*q+i)*q+j] = v
				dst.Gxx[(k*q+j)*q+i] = complex(real(v), -imag(v))
			}
		}
		for n := k * p * q; n < (k+1)*p*q; n++ {
			dst.Gyx[n] = mean(a.gyx[n], scale, m)
		}
		for n := k * p; n < (k+1)*p; n++ {
			dst.Gyy[n] = a.gyy[n] * scale / m
		}
	}
}

func mean(sum complex128, scale, m float64) complex128 {
	return complex(real(sum)*scale/m, imag(sum)*scale/m)
}

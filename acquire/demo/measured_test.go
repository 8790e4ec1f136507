package demo

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"

	"shakerwatch/acquire/rig"
)

// transform returns the spectrum of every stride-th sample of v from first on, under a periodic Hann
// window, unscaled.
func transform(v []float64, first, stride int) []complex128 {
	n := (len(v) - first + stride - 1) / stride
	x := make([]float64, n)
	for i := range x {
		x[i] = v[first+i*stride] * 0.5 * (1 - math.Cos(2*math.Pi*float64(i)/float64(n)))
	}
	return fourier.NewFFT(n).Coefficients(nil, x)
}

// averaged holds one line's cross-products of two forces and p responses, in N and m/s².
type averaged struct {
	xx [2][2]complex128
	yx [][2]complex128
	yy []float64
}

// measure averages blocks of the rig's source, as estimates would, and returns the lines up to max_frequency.
func measure(t *testing.T, r *rig.Rig, blocks int) []averaged {
	t.Helper()
	s := newDemo(t, r, 5)
	block := r.Grid.Block * r.Grid.Decimation
	lines := make([]averaged, 1+int(r.Analysis.MaxFrequencyHz*float64(block)/r.Source.RateHz))
	x := make([][]complex128, 2)
	y := make([][]complex128, len(r.Responses))
	spectrum := func(v []float64, c rig.Channel) []complex128 {
		z := transform(v, c.Index, s.Channels())
		for k := range z {
			z[k] *= complex(c.Scale(), 0)
		}
		return z
	}
	for range blocks {
		v := read(t, s, block)
		for i, c := range r.Forces {
			x[i] = spectrum(v, c)
		}
		for o, c := range r.Responses {
			y[o] = spectrum(v, c)
		}
		for k := range lines {
			lines[k].add(k, x, y)
		}
	}
	return lines
}

func (l *averaged) add(k int, x, y [][]complex128) {
	if l.yx == nil {
		l.yx, l.yy = make([][2]complex128, len(y)), make([]float64, len(y))
	}
	for i := range 2 {
		for j := range 2 {
			l.xx[i][j] += x[i][k] * cmplx.Conj(x[j][k])
		}
		for o := range y {
			l.yx[o][i] += y[o][k] * cmplx.Conj(x[i][k])
		}
	}
	for o := range y {
		l.yy[o] += real(y[o][k] * cmplx.Conj(y[o][k]))
	}
}

// h returns H1 and the multiple coherence of response o.
func (l *averaged) h(o int) (h [2]complex128, coherence float64) {
	g := l.xx
	det := g[0][0]*g[1][1] - g[0][1]*g[1][0]
	h[0] = (l.yx[o][0]*g[1][1] - l.yx[o][1]*g[1][0]) / det
	h[1] = (l.yx[o][1]*g[0][0] - l.yx[o][0]*g[0][1]) / det
	explained := h[0]*cmplx.Conj(l.yx[o][0]) + h[1]*cmplx.Conj(l.yx[o][1])
	return h, real(explained) / l.yy[o]
}

// The whole way, with noise, axis signs and units: what is estimated from the frames is the truth.
func TestMeasuredResponsesAreTheTruth(t *testing.T) {
	for _, c := range []struct {
		name   string
		change func(r *rig.Rig)
	}{
		{"demo", func(*rig.Rig) {}},
		{"four times the rate", func(r *rig.Rig) { r.Source.RateHz, r.Grid.Decimation = 10240, 4 }},
		{"a rate of its own, forces turned", func(r *rig.Rig) {
			r.Source.RateHz = 2816
			r.Forces[0].Axis, r.Forces[1].Axis = "-z", "-z"
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := Rig()
			c.change(r)
			truth, err := NewTruth(r)
			if err != nil {
				t.Fatal(err)
			}
			lines := measure(t, r, 30)
			spacingHz := r.Source.RateHz / float64(r.Grid.Block*r.Grid.Decimation)
			var worst float64
			for o := range r.Responses {
				for i := range r.Forces {
					var miss, size float64
					for k := range lines {
						freqHz := float64(k) * spacingHz
						if freqHz < r.Analysis.MinFrequencyHz {
							continue
						}
						h, _ := lines[k].h(o)
						want := truth.H(freqHz, o, i)
						miss += cmplx.Abs(h[i] - want)
						size += cmplx.Abs(want)
					}
					worst = max(worst, miss/size)
					// leakage at the peaks and the random error of 30 averages left 5 % at worst when this was written
					if miss/size > 0.10 {
						t.Errorf("H of %s and %s is off by %.0f %% on average: want at most 10",
							r.Responses[o].Name, r.Forces[i].Name, 100*miss/size)
					}
				}
			}
			t.Logf("the worst H is off by %.1f %% on average", 100*worst)
		})
	}
}

// The coherence is high, as on a good rig, but not perfect: it dips in antiresonances and where forces drop.
func TestMeasuredCoherence(t *testing.T) {
	r := Rig()
	lines := measure(t, r, 40)
	lowest := 1.0
	for o, c := range r.Responses {
		var good, all float64
		for k := range lines {
			if freqHz := float64(k) * demoSpacingHz; freqHz < r.Analysis.MinFrequencyHz {
				continue
			}
			_, coherence := lines[k].h(o)
			all++
			lowest = min(lowest, coherence)
			if coherence > 0.9 {
				good++
			}
		}
		t.Logf("%-5s multiple coherence above 0.9 on %.1f %% of the lines", c.Name, 100*good/all)
		if good/all < 0.8 {
			t.Errorf("%s: multiple coherence above 0.9 on %.1f %% of the lines: want at least 80", c.Name, 100*good/all)
		}
	}
	t.Logf("lowest %.2f", lowest)
	if lowest > 0.9 {
		t.Errorf("multiple coherence nowhere below %.2f: want dips, as on a real rig", lowest)
	}
}

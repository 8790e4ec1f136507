package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"

	"shakerwatch/spectra"
)

// A simulation is a rig in time samples: forces from white noise e through short filters, responses from
// the forces through others, white noise on the responses. It goes through the window, the transform and
// the average of the program.
type simulation struct {
	window  spectra.Window
	block   int
	overlap float64
	blocks  int
	memory  int // blocks of exponential averaging, 0 for none

	force     [][][]float64 // (q,q,taps) from e to the forces
	structure [][][]float64 // (p,q,taps) from the forces to the responses, the truth
	resonance []float64     // two coefficients of y(t) = ... + a1 y(t-1) + a2 y(t-2); none without
	noise     float64       // standard deviation
	settle    int           // frames before the first block, for the filters to settle

	lines []int // that are looked at
}

// shape is that of the lines that are looked at.
func (s *simulation) shape() spectra.Shape {
	return spectra.Shape{Lines: len(s.lines), Forces: len(s.force), Responses: len(s.structure)}
}

func (s *simulation) averaging() spectra.Averaging { return spectra.Averaging{Memory: s.memory} }

// run is the average of one run, of the lines that are looked at.
func (s *simulation) run(rng *rand.Rand) *spectra.Snapshot {
	hop := int(float64(s.block)*(1-s.overlap) + 0.5)
	frames := s.settle + hop*(s.blocks-1) + s.block
	e := make([][]float64, len(s.force))
	for i := range e {
		e[i] = white(rng, frames, 1)
	}
	channels := filtered(s.force, e)
	for _, y := range filtered(s.structure, channels) {
		for t := range y {
			for n, a := range s.resonance {
				if t > n {
					y[t] += a * y[t-n-1]
				}
			}
		}
		for t, v := range white(rng, frames, s.noise) {
			y[t] += v
		}
		channels = append(channels, y)
	}

	window := s.window.Values(s.block)
	transform := spectra.NewTransform(window)
	average := spectra.NewAverage(s.shape(), window, hop, 1, 1, s.averaging())
	all := make([]complex128, (s.block/2+1)*len(channels))
	looked := make([]complex128, 0, len(s.lines)*len(channels))
	for n := range s.blocks {
		for ch, samples := range channels {
			transform.ChannelTo(all, ch, len(channels), samples[s.settle+n*hop:][:s.block])
		}
		looked = looked[:0]
		for _, k := range s.lines {
			looked = append(looked, all[k*len(channels):][:len(channels)]...)
		}
		average.Sum([][]complex128{looked}, 0, len(s.lines))
		average.Count(int64(n * hop))
	}
	snapshot := spectra.NewSnapshot(s.shape(), s.averaging())
	average.SnapshotTo(snapshot)
	return snapshot
}

func white(rng *rand.Rand, n int, deviation float64) []float64 {
	list := make([]float64, n)
	for i := range list {
		list[i] = deviation * rng.NormFloat64()
	}
	return list
}

// filtered is Σ_i Σ_τ taps[o][i][τ] in[i](t-τ), output by output.
func filtered(taps [][][]float64, in [][]float64) [][]float64 {
	out := make([][]float64, len(taps))
	for o := range taps {
		out[o] = make([]float64, len(in[0]))
		for i := range in {
			for lag, c := range taps[o][i] {
				for t := lag; t < len(in[i]); t++ {
					out[o][t] += c * in[i][t-lag]
				}
			}
		}
	}
	return out
}

// truth is the frequency response of response o to force i at line k.
func (s *simulation) truth(k, o, i int) complex128 {
	z := cmplx.Rect(1, -2*math.Pi*float64(k)/float64(s.block))
	below := complex(1, 0)
	for n, a := range s.resonance {
		below -= complex(a, 0) * cmplx.Pow(z, complex(float64(n+1), 0))
	}
	return polynomial(s.structure[o][i], z) / below
}

func polynomial(taps []float64, z complex128) complex128 {
	var sum complex128
	for n := len(taps) - 1; n >= 0; n-- {
		sum = sum*z + complex(taps[n], 0)
	}
	return sum
}

// filters are n by m random filters of the given number of taps, each half as large as the last.
func filters(rng *rand.Rand, n, m, taps int) [][][]float64 {
	list := make([][][]float64, n)
	for o := range list {
		list[o] = make([][]float64, m)
		for i := range list[o] {
			list[o][i] = white(rng, taps, 1)
			for lag := range list[o][i] {
				list[o][i][lag] *= math.Pow(0.5, float64(lag))
			}
		}
	}
	return list
}

package estimate

import (
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/spectra"
)

var allWindows = []spectra.Window{spectra.Hann, spectra.Rectangular, spectra.FlatTop}

// smeared is the definition of kernel.mode: 1/(1 + 2ix/B) weighted with |W|², summed over a grid of a
// 32nd of a line. The sum stops where |W|² of the rectangular window, which falls with the square of the
// distance only, leaves 2e-4.
func smeared(w spectra.Window, x, bandwidth float64) complex128 {
	const fine, reach = 32, 600
	alpha := windowTerms(w)
	var sum complex128
	var power float64
	for j := -reach * fine; j <= reach*fine; j++ {
		d := (float64(j) + 0.5) / fine
		var amplitude float64
		for k, a := range alpha {
			amplitude += a * math.Sin(math.Pi*d) / (math.Pi * (d - float64(k-maxTerm)))
		}
		amplitude *= amplitude
		power += amplitude
		sum += complex(amplitude, 0) / complex(1, 2*(x-d)/bandwidth)
	}
	return sum / complex(power, 0)
}

func TestKernelIsTheWeightedMode(t *testing.T) {
	for _, w := range allWindows {
		kn := newKernel(w, true)
		for _, bandwidth := range []float64{0.3, 1, 4, 15} {
			for _, x := range []float64{0, 0.37, -1, 5.5} {
				got, want := kn.mode(x, bandwidth), smeared(w, x, bandwidth)
				if cmplx.Abs(got-want) > 3e-4 {
					t.Errorf("%s, %v lines off a mode of %v lines: %.5f, want %.5f", w, x, bandwidth, got, want)
				}
			}
		}
	}
}

// TestPeaksAreLow has the figures of a simulation with a Hann window (-6.7 % at 4 lines a bandwidth,
// -2.0 % at 8), and (4/3)(spacing/Br)², to which all must come for wide modes.
func TestPeaksAreLow(t *testing.T) {
	kn := newKernel(spectra.Hann, true)
	for _, test := range []struct{ bandwidth, low, tolerance float64 }{
		{4, 0.067, 0.003}, {8, 0.020, 0.0015}, {40, 4. / 3 / 1600, 1e-5}, {1e-6, 1, 1e-5},
	} {
		if got := kn.low(test.bandwidth); math.Abs(got-test.low) > test.tolerance {
			t.Errorf("a peak of %v lines is low by %.4f, want %.4f", test.bandwidth, got, test.low)
		}
	}
	if got := newKernel(spectra.Rectangular, false).low(0.5); got != 0 {
		t.Errorf("without leakage a peak is low by %v", got)
	}
}

func TestKernelIsSmooth(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		kn := newKernel(rapid.SampledFrom(allWindows).Draw(t, "window"), true)
		x := rapid.OneOf(rapid.Float64Range(-20, 20), rapid.Just(1.0), rapid.Just(-2.0)).Draw(t, "x")
		bandwidth := math.Exp(rapid.Float64Range(-12, 5).Draw(t, "ln bandwidth"))
		a, b := kn.mode(x, bandwidth), kn.mode(x+1e-7, bandwidth*(1+1e-7))
		// |1/(1+2iu)| changes by less than 2 a bandwidth, and the kernel makes it smoother.
		if cmplx.Abs(a-b) > 2e-7*(1+2/bandwidth)+1e-9 || cmplx.Abs(a) > 1.0001 {
			t.Fatalf("%v and just beside it %v", a, b)
		}
	})
}

// TestLineCorrelation: Hann from its transform; flat top by numpy.fft.fft(w**2) of the ISO 18431-2
// coefficients, see flatTopCorrelation.
func TestLineCorrelation(t *testing.T) {
	hann := NewLineCorrelation(spectra.Hann)
	want := LineCorrelation{4. / 9, 1. / 36}
	for j := range hann {
		if math.Abs(hann[j]-want[j]) > 1e-14 {
			t.Errorf("Hann lines %d apart: %v, want %v", j+1, hann[j], want[j])
		}
	}
	for j, c := range NewLineCorrelation(spectra.Rectangular) {
		if math.Abs(c) > 1e-28 {
			t.Errorf("rectangular lines %d apart: %v, want 0", j+1, c)
		}
	}
	flatTop := NewLineCorrelation(spectra.FlatTop)
	for j, want := range flatTopCorrelation {
		if math.Abs(flatTop[j]-want) > 1e-6 {
			t.Errorf("flat top lines %d apart: %.6f, want %.6f", j+1, flatTop[j], want)
		}
	}
}

var flatTopCorrelation = []float64{0.828149, 0.481195, 0.194261, 0.047361, 0.005537, 0.000239, 0.000003, 0}

package demo

import (
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// Two integrators in a row under a ramp: the outputs are t²/2, t³/6 and the ramp itself, which no
// step may miss.
func TestStepperIsExactOnARamp(t *testing.T) {
	sys := stateSpace{
		a: mat.NewDense(2, 2, []float64{0, 0, 1, 0}),
		b: mat.NewDense(2, 1, []float64{1, 0}),
		c: mat.NewDense(3, 2, []float64{1, 0, 0, 1, 0, 0}),
		d: mat.NewDense(3, 1, []float64{0, 0, 1}),
	}
	const stepS = 0.25
	for _, sub := range []int{1, 2, 5} {
		s := newStepper(sys, stepS, sub)
		y := make([]float64, 3)
		for frame := range 7 {
			for k := range s.input(0) {
				s.input(0)[k] = stepS * float64(frame*sub+k+1)
			}
			s.step(y)
			now := stepS * float64((frame+1)*sub)
			for i, want := range []float64{now * now / 2, now * now * now / 6, now} {
				if math.Abs(y[i]-want) > 1e-12*(1+want) {
					t.Errorf("%d sub steps, frame %d, output %d: %g: want %g", sub, frame, i, y[i], want)
				}
			}
		}
	}
}

// Folding the sub steps into one matrix changes nothing but rounding.
func TestStepperFoldsSubSteps(t *testing.T) {
	_, l := demoLayout(t)
	sys := couple(l.structure, l.shakers, l.sensors)
	const sub, stepS = 6, 1.0 / 15360
	folded, single := newStepper(sys, stepS, sub), newStepper(sys, stepS, 1)
	rng := stream(1, "test")
	got, want := make([]float64, folded.observe.Rows), make([]float64, folded.observe.Rows)
	for frame := range 200 {
		for k := range sub {
			for i := range l.shakers {
				v := rng.NormFloat64()
				folded.input(i)[k], single.input(i)[0] = v, v
			}
			single.step(want)
		}
		folded.step(got)
		for i := range got {
			// 1e-8 N or m/s²: the stinger, 1e8 N/m, takes differences of displacements
			if math.Abs(got[i]-want[i]) > 1e-8*(1+math.Abs(want[i])) {
				t.Fatalf("frame %d, output %d: %g: want %g", frame, i, got[i], want[i])
			}
		}
	}
}

func demoStepper(t testing.TB, rateHz float64) (sys stateSpace, s *stepper, stepS float64, q int) {
	_, l := demoLayout(t)
	sys = couple(l.structure, l.shakers, l.sensors)
	sub := subSamples(rateHz, Rig().Analysis.MaxFrequencyHz)
	stepS = 1 / (rateHz * float64(sub))
	return sys, newStepper(sys, stepS, sub), stepS, len(l.shakers)
}

// A triangle hold filters the drive by sinc²; forces and responses share that, so it drops out of H.
func TestSampledTransferAgainstContinuous(t *testing.T) {
	for rateHz, every := range map[float64]int{2560: 1, 3000: 9, 51200: 9} { // all lines at the demo's own rate
		sys, s, stepS, q := demoStepper(t, rateHz)
		var worstDrive, worstH, worstOfTop float64
		var seen int
		lines(Rig(), func(freqHz float64) {
			if seen++; seen%every != 0 {
				return
			}
			x := math.Pi * freqHz * stepS
			droop := complex(math.Pow(math.Sin(x)/x, 2), 0)
			want := continuous(t, sys, freqHz)
			got := discrete(t, s, stepS, freqHz)
			for o := range got {
				for i := range got[o] {
					top := math.Max(cmplx.Abs(want[0][i]), cmplx.Abs(want[1][i]))
					worstDrive = max(worstDrive, cmplx.Abs(got[o][i]/droop-want[o][i])/top)
				}
			}
			h, truth := ratio(got[:q], got[q:]), ratio(want[:q], want[q:])
			for o := range h {
				for i := range h[o] {
					miss := cmplx.Abs(h[o][i] - truth[o][i])
					worstH = max(worstH, miss/cmplx.Abs(truth[o][i]))
					worstOfTop = max(worstOfTop, miss/(1e-2+cmplx.Abs(truth[o][i])))
				}
			}
		})
		t.Logf("%g Hz: current to output off by %.1e, H by %.1e of itself at worst, by %.1e of H + 0.01 m/s² per N",
			rateHz, worstDrive, worstH, worstOfTop)
		if worstDrive > 3e-6 || worstH > 1e-4 || worstOfTop > 3e-6 {
			t.Errorf("%g Hz: off by %.1e, %.1e and %.1e: want at most 3e-6, 1e-4 and 3e-6",
				rateHz, worstDrive, worstH, worstOfTop)
		}
	}
}

// The same by stepping: a periodic drive, run until the start has died out, has a spectrum that
// falls on the lines, so no window comes between H and the truth.
func TestSteppedPeriodAgainstTruth(t *testing.T) {
	const rateHz, period = 2560, 4096
	_, l := demoLayout(t)
	_, s, _, q := demoStepper(t, rateHz)
	const settle = 12 * rateHz // the slowest mode decays to 2 % and takes little part above 10 Hz
	tested := []int{16, 70, 188, 396, 401, 404, 600, 716, 996, 1171, 1446, 1600}
	y := make([][][]complex128, len(tested)) // by line, output, drive
	for k := range y {
		y[k] = zeros(q+len(l.sensors), q)
	}
	out := make([]float64, q+len(l.sensors))
	drive := make([]float64, period*s.sub)
	for k := range drive {
		for n, line := range tested {
			turns := float64(line*k%len(drive)) / float64(len(drive))
			drive[k] += math.Sin(2*math.Pi*turns + float64(n*n)) // n*n keeps the peaks of the sines apart
		}
	}
	for driven := range q {
		_, s, _, _ = demoStepper(t, rateHz)
		for frame := range settle + period {
			for i := range q {
				clear(s.input(i))
			}
			copy(s.input(driven), drive[frame%period*s.sub:])
			s.step(out)
			if frame < settle {
				continue
			}
			for k, line := range tested {
				turn := cmplx.Exp(complex(0, -2*math.Pi*float64(line*frame%period)/period))
				for o, v := range out {
					y[k][o][driven] += complex(v, 0) * turn
				}
			}
		}
	}
	for k, line := range tested {
		freqHz := float64(line) * demoSpacingHz
		h := ratio(y[k][:q], y[k][q:])
		for o := range h {
			for i := range h[o] {
				want := l.structure.accelerance(freqHz, l.sensors[o], l.shakers[i].at)
				if miss := cmplx.Abs(h[o][i] - want); miss > 1e-4*(1e-2+cmplx.Abs(want)) {
					t.Errorf("H of %d and %d at %g Hz: %v: want %v", o, i, freqHz, h[o][i], want)
				}
			}
		}
	}
}

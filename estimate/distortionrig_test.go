package estimate

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"

	"shakerwatch/spectra"
)

// A bentRig is a small structure, simulated in time: two masses of 1 kg, each on a spring to the ground
// and a third spring between them, modes at 25 and 60 Hz, damped by 6 % and 5 %. The first mass's spring
// stiffens: its force is stiffness (x + cubic x³). A force acts on each mass, held over every sample.
type bentRig struct {
	cubic float64 // 1/m²
	state [4]float64
}

const (
	bentRateHz = 256.0
	bentPeriod = 512 // samples, so that the lines are half a hertz apart
	bentSettle = 1   // periods: both modes fall to e^-18
	bentSteps  = 6   // Runge-Kutta steps a sample, a quarter of a radian of the faster mode
	bentForceN = 30.0

	bentGround   = 24674.0 // N/m, (2π 25 Hz)² · 1 kg
	bentCoupling = 58724.0 // N/m, half of (2π 60 Hz)² · 1 kg less the ground's
	bentDamping  = 18.8    // N·s/m to the ground, 2 · 0.06 · 2π 25 Hz · 1 kg
	bentBetween  = 9.4     // N·s/m between the masses, so that 2 · 0.05 · 2π 60 Hz · 1 kg = 18.8 + 2 · 9.4
)

// slope is the rate of change of x = (displacements, velocities) under forces f; its last two are
// the accelerations.
func (r *bentRig) slope(x [4]float64, f [2]float64) [4]float64 {
	link := bentCoupling*(x[1]-x[0]) + bentBetween*(x[3]-x[2])
	return [4]float64{
		x[2], x[3],
		f[0] - bentGround*(x[0]+r.cubic*x[0]*x[0]*x[0]) - bentDamping*x[2] + link,
		f[1] - bentGround*x[1] - bentDamping*x[3] - link,
	}
}

// step gives the accelerations and moves on by a sample.
func (r *bentRig) step(f [2]float64) (a [2]float64) {
	first := r.slope(r.state, f)
	const h = 1 / (bentRateHz * bentSteps)
	along := func(slope [4]float64, h float64) (x [4]float64) {
		for i := range x {
			x[i] = r.state[i] + h*slope[i]
		}
		return x
	}
	for range bentSteps {
		k1 := r.slope(r.state, f)
		k2 := r.slope(along(k1, h/2), f)
		k3 := r.slope(along(k2, h/2), f)
		k4 := r.slope(along(k3, h), f)
		for i := range r.state {
			r.state[i] += h / 6 * (k1[i] + 2*k2[i] + 2*k3[i] + k4[i])
		}
	}
	return [2]float64{first[2], first[3]}
}

// run fills samples, channel by channel (forces, then accelerations), with k settled periods of one
// random block.
func (r *bentRig) run(rng *rand.Rand, samples []float64, k int) {
	var forces [bentPeriod][2]float64
	for i := range forces {
		forces[i] = [2]float64{bentForceN * rng.NormFloat64(), bentForceN * rng.NormFloat64()}
	}
	for period := range bentSettle + k {
		for i, f := range forces {
			a := r.step(f)
			if period < bentSettle {
				continue
			}
			for ch, v := range [4]float64{f[0], f[1], a[0], a[1]} {
				samples[(ch*k+period-bentSettle)*bentPeriod+i] = v
			}
		}
	}
}

var bentShape = spectra.Shape{Lines: 200, Forces: 2, Responses: 2}

// reference is the density of what the best linear approximation leaves of each response, (line, response),
// and that approximation, (line, response, force), from many noise-free random blocks, worked
// out here: least squares line by line with the 2 by 2 inverse written out.
func (r *bentRig) reference(rng *rand.Rand, blocks int) (density []float64, h []complex128) {
	fft := fourier.NewFFT(bentPeriod)
	lines := make([][4][]complex128, blocks)
	samples := make([]float64, 4*bentPeriod)
	for b := range lines {
		r.run(rng, samples, 1)
		for ch := range 4 {
			lines[b][ch] = fft.Coefficients(nil, samples[ch*bentPeriod:(ch+1)*bentPeriod])
		}
	}
	for k := range bentShape.Lines {
		for o := range 2 {
			var g [2][2]complex128
			var c [2]complex128
			for _, x := range lines {
				for i := range 2 {
					c[i] += x[2+o][k] * cmplx.Conj(x[i][k])
					for j := range 2 {
						g[i][j] += x[i][k] * cmplx.Conj(x[j][k])
					}
				}
			}
			det := g[0][0]*g[1][1] - g[0][1]*g[1][0]
			row := [2]complex128{(c[0]*g[1][1] - c[1]*g[1][0]) / det, (c[1]*g[0][0] - c[0]*g[0][1]) / det}
			var left float64
			for _, x := range lines {
				left += abs2(x[2+o][k] - row[0]*x[0][k] - row[1]*x[1][k])
			}
			density = append(density, left/float64(blocks-2)*2/(bentRateHz*bentPeriod))
			h = append(h, row[:]...)
		}
	}
	return density, h
}

// A measurement of a bentRig by the real engine with white noise on forces (N) and responses (m/s²).
type bentRun struct {
	cubic                     float64
	noiseForce, noiseResponse float64
}

const bentBlocks, bentKept = 32, 2

func (m bentRun) snapshot(rng *rand.Rand) *spectra.Snapshot {
	r := bentRig{cubic: m.cubic}
	return averageSamples(bentShape, bentPeriod, bentKept, bentBlocks, bentRateHz, func(block *spectra.Block) {
		r.run(rng, block.Samples, bentKept)
		for at := range block.Samples {
			sd := m.noiseForce
			if at >= 2*bentKept*bentPeriod {
				sd = m.noiseResponse
			}
			block.Samples[at] += sd * rng.NormFloat64()
		}
	})
}

// bentCubic bends the spring's stiffness by some 2 % at the usual amplitude (3·cubic·x², x = 1.4 mm).
const bentCubic = 4000.0

// bentLines are the lines around the modes, where the stiffening spring has its say.
const bentFirst, bentLast = 30, 150

// A bentResult is what one measurement says of one response, means over lines.
type bentResult struct {
	distortion      float64 // over the reference, on lines where that exceeds the injected noise
	lines           float64 // how many these are
	noise, force    float64 // of response and one force, over white noise of standard deviation 1
	beyond          float64 // share of lines beyond chance
	againstResponse float64 // largest distortion over Gyy
}

// measure measures m once and compares response o with the reference and its h.
func (m bentRun) measure(s *spectra.Snapshot, o int, reference []float64, h []complex128) bentResult {
	const unit = 2 / bentRateHz
	d := distortionOf(s)
	var r bentResult
	const all = bentLast - bentFirst + 1
	for k := bentFirst; k <= bentLast; k++ {
		n := k*2 + o
		injected := m.noiseResponse*m.noiseResponse + m.noiseForce*m.noiseForce*(abs2(h[n*2])+abs2(h[n*2+1]))
		if reference[n] > injected*unit/bentKept {
			r.distortion += d.DistortionResponse[n] / reference[n]
			r.lines++
		}
		r.noise += d.NoiseResponse[n] / unit / all
		r.force += d.NoiseForce[n] / unit / all
		if d.DistortionResponse[n] > d.Chance[n] {
			r.beyond += 1.0 / all
		}
		r.againstResponse = max(r.againstResponse, d.DistortionResponse[n]/s.Gyy[n])
	}
	r.distortion /= r.lines
	return r
}

// TestStiffeningSpringIsDistortion: noise-free, the distortion is the reference's and there is no noise;
// with noise on every channel the noise is the injected one and the distortion stays; a linear
// structure with that noise has none. The statistics are means over lines and over eight
// measurements; they may lie 4.5 of their own deviations off.
func TestStiffeningSpringIsDistortion(t *testing.T) {
	const runs, blocks = 8, 400
	bent := bentRig{cubic: bentCubic}
	reference, h := bent.reference(rand.New(rand.NewPCG(50, 1)), blocks)
	for _, test := range []struct {
		name string
		bentRun
	}{
		{"stiffening spring", bentRun{cubic: bentCubic}},
		{"stiffening spring and noise", bentRun{bentCubic, 0.3, 0.6}},
		{"linear", bentRun{}},
		{"linear and noise", bentRun{0, 0.3, 0.6}},
	} {
		t.Run(test.name, func(t *testing.T) {
			rng := rand.New(rand.NewPCG(51, 1))
			var results [2][]bentResult
			for range runs {
				s := test.snapshot(rng)
				for o := range results {
					results[o] = append(results[o], test.measure(s, o, reference, h))
				}
			}
			for o := range results {
				// The reference scatters too, as its blocks do against those of all measurements.
				test.check(t, results[o], math.Sqrt(1+float64(runs*bentBlocks)/blocks))
			}
		})
	}
}

func (m bentRun) check(t *testing.T, results []bentResult, wider float64) {
	t.Helper()
	mean := func(of func(bentResult) float64) (mean, sd float64) {
		var values []float64
		for _, r := range results {
			values = append(values, of(r))
		}
		return meanAndError(values)
	}
	near := func(what string, got, sd, want float64) {
		t.Helper()
		t.Logf("%s %.4g ± %.2g, want %.4g", what, got, sd, want)
		// Noise-free, what has not settled leaves less than 1e-9.
		if !(math.Abs(got-want) < 4.5*sd+1e-9) {
			t.Errorf("%s %.4g ± %.2g, want %.4g", what, got, sd, want)
		}
	}
	noise, sd := mean(func(r bentResult) float64 { return r.noise })
	near("noise of the response", noise, sd, m.noiseResponse*m.noiseResponse)
	noise, sd = mean(func(r bentResult) float64 { return r.force })
	near("noise of the force", noise, sd, m.noiseForce*m.noiseForce)

	distortion, sd := mean(func(r bentResult) float64 { return r.distortion })
	beyond, _ := mean(func(r bentResult) float64 { return r.beyond })
	against, _ := mean(func(r bentResult) float64 { return r.againstResponse })
	t.Logf("distortion up to %.2g of the response, beyond chance on %.4f of the lines", against, beyond)
	noisy := m.noiseResponse > 0
	switch {
	case m.cubic > 0:
		near("distortion over the reference", distortion, sd*wider, 1)
		if results[0].lines < 40 || against > 0.05 {
			t.Errorf("too few lines (%v) or no weak distortion (%v)", results[0].lines, against)
		}
		if least := 0.999; !noisy && beyond < least || beyond < 0.5 {
			t.Errorf("distortion beyond chance on %.3f of the lines", beyond)
		}
	case noisy:
		// Some 970 lines in all: four deviations of a share of 1 in 100.
		if beyond > 0.023 {
			t.Errorf("a linear structure is beyond chance on %.3f of the lines", beyond)
		}
	case against > 1e-9:
		t.Errorf("distortion %v of the response of a linear structure", against)
	}
}

package watch

import (
	"fmt"
	"math"
	"math/cmplx"
)

const (
	// reciprocityFrom is from how many averages on reciprocity is judged: before, its random error hides
	// all but what polarity shows anyway.
	reciprocityFrom = 16

	// reciprocityTolerance is the share of |H| by which two sides may differ on any rig: two calibrations of 3 % each
	// (common practice, no source).
	reciprocityTolerance = 0.05

	// offMean, offLine and offShare: reciprocity is off when the mean of u exceeds the first and that share
	// of lines the second, which chance does on one line of a hundred.
	offMean, offLine, offShare = 2.5, 4.6, 0.2

	// A cause is called by what it does to the ratio of the two sides: the phase at the top of the band, rad, and the
	// gain beyond what two calibrations differ by.
	skewPhase = 0.15
	gainShare = 0.08

	// mostSkew is the largest skew that is looked for, as a share of the block: a longer one decorrelates
	// force and response anyway. skewSteps is how many steps are taken in a turn of phase at the top of the band.
	mostSkew  = 1. / 32
	skewSteps = 8
)

// sides are the two sides of a pair on one line, with what their difference scatters by.
type sides struct {
	ab, ba       complex128
	vab, vba     float64 // complex variances
	cov          float64 // real part of the covariance
	fraction     float64 // of the line in the band's top frequency
	significance float64 // 0 to 1: how much the line says about the ratio
}

// reciprocities finds the pairs of driving points that disagree beyond their random error.
func (k *looker) reciprocities(dst []finding) []finding {
	if k.s.Averages < reciprocityFrom {
		return dst
	}
	before := len(dst)
	for n, pair := range k.pairs {
		lines := k.sidesOf(n)
		if !k.off(lines, 1, 0) {
			continue
		}
		f := finding{kind: ReciprocityOff, key: n, channels: []int{pair[0], pair[1]},
			about: []int{k.layout.q + k.layout.driving[pair[0]], k.layout.q + k.layout.driving[pair[1]]}}
		k.explain(&f, lines)
		dst = append(dst, f)
	}
	k.blame(dst[before:])
	return dst
}

// blame says which force is in every pair that disagrees, where one is and others agree.
func (k *looker) blame(found []finding) {
	if len(found) < 2 {
		return
	}
	for i := range k.layout.q {
		in := 0
		for _, f := range found {
			if f.channels[0] == i || f.channels[1] == i {
				in++
			}
		}
		if in == len(found) {
			for n := range found {
				found[n].detail += fmt.Sprintf("; %s is in all pairs that disagree, so begin there", k.layout.names[i])
			}
			return
		}
	}
}

// sidesOf gathers pair number n on all lines that are known.
func (k *looker) sidesOf(n int) []sides {
	a, b := k.pairs[n][0], k.pairs[n][1]
	oa, ob := k.layout.driving[a], k.layout.driving[b]
	sa, sb := k.layout.sign[a], k.layout.sign[b]
	var lines []sides
	for line := range k.model.regular {
		ra, rb := k.residual(line, oa), k.residual(line, ob)
		if !(ra > 0 && rb > 0) {
			continue
		}
		k.model.factor(line).inverse(k.column, b)
		inverseBB, inverseAB := real(k.column[b]), k.column[a]
		k.model.factor(line).inverse(k.column, a)
		inverseAA := real(k.column[a])
		s := sides{
			ab:       complex(sa, 0) * k.model.at(line, oa, b),
			ba:       complex(sb, 0) * k.model.at(line, ob, a),
			vab:      ra * inverseBB / k.model.ne,
			vba:      rb * inverseAA / k.model.ne,
			cov:      sa * sb * real(k.crossResidual(n, line)*inverseAB) / k.model.ne,
			fraction: float64(k.layout.cells.first+line) / float64(k.layout.cells.last),
		}
		if k.layout.taper {
			s.vab *= 1 + k.model.ne*k.unexplained(line, oa)
			s.vba *= 1 + k.model.ne*k.unexplained(line, ob)
		}
		size := abs2(s.ab) + abs2(s.ba)
		s.significance = size / (size + 4*(s.vab+s.vba))
		lines = append(lines, s)
	}
	return lines
}

// unexplained is the share of response o that no force explains, 1 - g2. Without a window it is leakage for the most part,
// which no averaging removes: of the forces' own kind, it biases H as noise would in 1/(1 - g2) averages.
func (k *looker) unexplained(line, o int) float64 {
	gyy := k.s.Gyy[(k.layout.cells.first+line)*k.layout.p+o]
	return min(1, k.residual(line, o)*k.model.v/k.model.ne/gyy)
}

// crossResidual is the residual cross-density of pair n's driving points, E[r_a r_b*].
func (k *looker) crossResidual(n, line int) complex128 {
	if k.cross[n] < 0 {
		return 0
	}
	grid := k.layout.cells.first + line
	pairs := len(k.s.Averaging.Pairs)
	g := k.s.GyyPairs[grid*pairs+k.cross[n]]
	if k.turned[n] {
		g = cmplx.Conj(g)
	}
	oa, ob := k.layout.driving[k.pairs[n][0]], k.layout.driving[k.pairs[n][1]]
	gyx := k.s.Gyx[(grid*k.layout.p+ob)*k.layout.q:]
	for i := range k.layout.q {
		g -= k.model.at(line, oa, i) * cmplx.Conj(gyx[i])
	}
	return g * complex(k.model.ne/k.model.v, 0)
}

// off tells whether the two sides disagree when the second is multiplied by gain and turned by a phase of turn at
// the top of the band:
//
//	t = |H_ab - g H_ba|² / (var_ab + |g|² var_ba - 2 Re(g* cov) + (5 % |H_ab|)²)
func (k *looker) off(lines []sides, gain, turn float64) bool {
	mean, share := k.disagreement(lines, gain, turn)
	return mean > offMean && share > offShare
}

// disagreement is the mean of u = v ln(1 + t/v), which is 1 when chance alone parts the sides, and the share of lines
// on which it exceeds offLine.
func (k *looker) disagreement(lines []sides, gain, turn float64) (mean, share float64) {
	var sum, above, count float64
	for _, s := range lines {
		g := cmplx.Rect(gain, turn*s.fraction)
		variance := s.vab + gain*gain*s.vba - 2*real(g)*s.cov + reciprocityTolerance*reciprocityTolerance*(abs2(s.ab)+gain*gain*abs2(s.ba))/2
		u := k.model.v * math.Log1p(abs2(s.ab-g*s.ba)/max(variance, math.SmallestNonzeroFloat64)/k.model.v)
		sum += u
		count++
		if u > offLine {
			above++
		}
	}
	return sum / count, above / count
}

// explain names the cause: what sign, gain and delay repair, they caused.
func (k *looker) explain(f *finding, lines []sides) {
	gain, turn := k.fitSides(lines)
	topHz := float64(k.layout.cells.last) * k.layout.spacingHz
	a, b := k.layout.names[f.channels[0]], k.layout.names[f.channels[1]]
	size := math.Abs(gain)
	switch {
	case k.off(lines, gain, turn):
		f.cause = CauseLocal
		f.detail = "and neither sign nor gain nor delay explains it: look whether the sensors are in line with the forces at both points"
	case math.Abs(turn) > skewPhase:
		f.cause, f.value = CauseSkew, turn/(2*math.Pi*topHz)
		late, early := a, b
		if turn > 0 {
			late, early = b, a
		}
		f.detail = fmt.Sprintf("by a delay of %.3g ms: a channel at %s's point is late, or one at %s's early; look for a channel with another filter or converter",
			1e3*math.Abs(f.value), late, early)
	case gain < 0:
		f.cause, f.value = CausePolarity, gain
		f.detail = "by its sign: look for a reversed sensor or cell at one of the two points, and at the axes in the rig file"
	case size > 1+gainShare || size < 1/(1+gainShare):
		f.cause, f.value = CauseGain, gain
		f.detail = fmt.Sprintf("by a factor of %.3g between the response at %s's point and the one at %s's: look at sensitivities and gains there", size, a, b)
	default:
		f.cause = CauseLocal
		f.detail = "a little, all over the band: look whether the sensors are in line with the forces at both points"
	}
}

// fitSides is the gain, its sign included, and the phase at the top of the band that make ab = gain e^{i turn
// fraction} ba fit best.
func (k *looker) fitSides(lines []sides) (gain, turn float64) {
	products := make([]complex128, len(lines))
	var logs, weight float64
	for n, s := range lines {
		size := cmplx.Abs(s.ab) * cmplx.Abs(s.ba)
		if !(size > 0) {
			continue
		}
		products[n] = s.ab * cmplx.Conj(s.ba) * complex(s.significance/size, 0)
		logs += s.significance * math.Log(cmplx.Abs(s.ab)/cmplx.Abs(s.ba))
		weight += s.significance
	}
	// A turn of one period over a block is a phase of 2π times the highest line.
	most := mostSkew * 2 * math.Pi * float64(k.layout.cells.last)
	step := 2 * math.Pi / skewSteps
	best := 0.0
	for n := range 2*int(most/step) + 1 {
		at := (float64(n) - math.Floor(most/step)) * step
		if c := match(products, lines, at); math.Abs(c) > math.Abs(best) {
			best, turn = c, at
		}
	}
	for step > 1e-4 { // halving around the best
		step /= 2
		for _, at := range []float64{turn - step, turn + step} {
			if c := match(products, lines, at); math.Abs(c) > math.Abs(best) {
				best, turn = c, at
			}
		}
	}
	return math.Copysign(math.Exp(logs/weight), best), turn
}

// match is how well a phase of turn at the top of the band fits, negative with the sign turned.
func match(products []complex128, lines []sides, turn float64) (sum float64) {
	for n, p := range products {
		sin, cos := math.Sincos(turn * lines[n].fraction)
		sum += real(p)*cos + imag(p)*sin
	}
	return sum
}

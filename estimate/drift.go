package estimate

import (
	"fmt"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mathext"

	"shakerwatch/spectra"
)

// Drift tells whether the frequency responses of the first blocks and of the other ones differ by
// more than their random errors: whether the structure stayed the same while it was measured.
//
// With H_e, H_l by H1 from the two parts and their complex variances by HVariance with each part's n_e,
// t = |H_e - H_l|² / (Var_e + Var_l) is nearly F(2, 2v), v = n_e,e + n_e,l - 2q, and u = v ln(1 + t/v)
// nearly exponential with mean 1. A sum of two estimated variances is F only when their weights are as
// their degrees of freedom. Simulated without a drift, parts of 2 to 1 as they can be, the mean of u is 1.12 for 12
// averages and two forces, 1.06 and 1.02 for 24 and 48 and four; with even parts of 8 and more it is 0.97 to 1.00, with blocks overlapped by 75 % 0.87 to 0.92.
// So the statement goes by u with Satterthwaite's degrees of freedom (Biometrics Bulletin 2, 1946) instead
// of v, line by line: 1.03, 1.00 and 1.01.
type Drift struct {
	// Ratio (p,q) is the mean of u over the lines of interest of each frequency response, which are
	// those of its error; lines with unknown u are left out. NaN when there are none, and always with
	// exponential averaging.
	Ratio []float64

	// Change (p,q) is by how much the two parts differ beyond their random error, relative to |H|:
	// the root of Σ (|H_e - H_l|² - Var_e - Var_l), not below 0, over Σ |H|², sums over the same lines.
	Change []float64

	shape       spectra.Shape
	early, late partLine
	sums        []driftSums // (p,q)
	sure        []float64   // (p,q) as Ratio with Satterthwaite's degrees of freedom
	lines       []int       // (p,q) with a known u
	floor       []float64   // (p,q)
	highest     []int       // (p,q)
	judged      bool        // both parts are long enough
}

// NewDrift makes a Drift for snapshots of the given shape.
func NewDrift(shape spectra.Shape) *Drift {
	count := shape.Responses * shape.Forces
	d := &Drift{
		Ratio: make([]float64, count), Change: make([]float64, count),
		shape: shape,
		early: newPartLine(shape.Forces), late: newPartLine(shape.Forces),
		sums: make([]driftSums, count), sure: make([]float64, count), lines: make([]int, count),
		floor: make([]float64, count), highest: make([]int, count),
	}
	fill(d.Ratio, math.NaN())
	fill(d.Change, math.NaN())
	return d
}

// Update fills d from a snapshot, its estimates and the target. It allocates nothing, and panics when
// the snapshot has another shape.
func (d *Drift) Update(s *spectra.Snapshot, e *Estimates, t Target) {
	if s.Shape != d.shape || e.Shape != d.shape {
		panic("estimate: snapshot has another shape")
	}
	fill(d.Ratio, math.NaN())
	fill(d.Change, math.NaN())
	fill(d.lines, 0)
	d.judged = false
	q := float64(d.shape.Forces)
	if len(s.Early.Gxx) == 0 || s.Memory > 0 || !(s.Early.EffectiveAverages > q && s.Late.EffectiveAverages > q) {
		return
	}
	free := s.Early.EffectiveAverages + s.Late.EffectiveAverages - 2*q
	d.judged = min(s.Early.EffectiveAverages, s.Late.EffectiveAverages)-q >= driftFree
	d.floor, d.highest = t.floors(d.floor, d.highest, e)
	fill(d.sums, driftSums{})
	for k := t.First; k <= t.Last; k++ {
		d.compare(s, e, k, free)
	}
	for n, sums := range d.sums {
		if d.lines[n] > 0 {
			d.Ratio[n] = sums.ratio / float64(d.lines[n])
			d.sure[n] = sums.sure / float64(d.lines[n])
			d.Change[n] = math.Sqrt(max(0, sums.beyond) / sums.power)
		}
	}
}

// driftSums are sums over the lines of interest of one frequency response.
type driftSums struct {
	ratio, sure float64 // of u, with either degrees of freedom
	beyond      float64 // of |H_e - H_l|² - Var_e - Var_l
	power       float64 // of |H|²
}

// compare adds line k to the sums; free is v.
func (d *Drift) compare(s *spectra.Snapshot, e *Estimates, k int, free float64) {
	q, p := d.shape.Forces, d.shape.Responses
	if !d.early.factor(&s.Early, k) || !d.late.factor(&s.Late, k) {
		return
	}
	for o := range p {
		if s.Early.Gyy[k*p+o] == 0 || s.Late.Gyy[k*p+o] == 0 {
			continue
		}
		d.early.solve(&s.Early, k, o)
		d.late.solve(&s.Late, k, o)
		for i := range q {
			n := o*q + i
			size := cmplx.Abs(e.H[k*p*q+n])
			square := abs2(d.early.h[i] - d.late.h[i])
			a, b := d.early.variance(i), d.late.variance(i)
			if !(size >= d.floor[n] && a+b > 0 && square < math.Inf(1)) {
				continue
			}
			own := (a + b) * (a + b) / (a*a/d.early.free() + b*b/d.late.free())
			sums := &d.sums[n]
			sums.ratio += free * math.Log1p(square/(a+b)/free)
			sums.sure += own * math.Log1p(square/(a+b)/own)
			sums.beyond += square - a - b
			sums.power += size * size
			d.lines[n]++
		}
	}
}

// driftAlarm is the false-alarm rate of a statement about drift: that of a judgement on all frequency
// responses together, when nothing drifts.
const driftAlarm = 1e-3

// driftFree is by how much n_e of the shorter part must exceed the number of forces before a statement is made:
// below, Satterthwaite's approximation gives several times as many false alarms as it should.
const driftFree = 4

// Beyond returns the frequency response, index into Ratio, whose drift is furthest beyond chance, and
// whether it is so at all: with a false-alarm rate of 1 in 1000 for all together, and when the change is
// larger than the random error that the target accepts. A smaller one is not worth an alarm, however
// sure it is after very many averages: it moves the result by less than what was called good enough.
func (d *Drift) Beyond(t Target) (n int, beyond bool) {
	if !d.judged {
		return 0, false
	}
	n, chance := d.furthest(t.Lines, func(n int) bool { return d.Change[n] > t.RandomError })
	return n, chance < driftAlarm
}

// furthest is the frequency response, of those that count, whose drift is least likely by chance, and the chance
// that any of all comes as far: 1 when none counts.
//
// A sum of W values u with mean 1 has the variance W + 2 Σ_j (W - j) c_j, c_j the correlation of two
// values j lines apart, and is taken as Gamma. c_j is the window's |c|⁴: the error of H is a sum of products of
// two transforms, noise and force, each correlated by c, and u goes with its square. That c_j holds for
// neighbouring lines of interest; where there are gaps between them the true variance is smaller.
func (d *Drift) furthest(lines LineCorrelation, counts func(n int) bool) (worst int, chance float64) {
	chance = 1
	for n, ratio := range d.sure {
		if d.lines[n] == 0 || !counts(n) {
			continue
		}
		w := float64(d.lines[n])
		variance := w
		for j, c := range lines {
			variance += 2 * max(0, w-float64(j+1)) * c * c
		}
		free := w * w / variance
		if p := mathext.GammaIncRegComp(free, free*ratio); p < chance {
			worst, chance = n, p
		}
	}
	return worst, min(1, chance*float64(len(d.Ratio)))
}

// sentence says what a drift of frequency response n means.
func (d *Drift) sentence(n int, name string) string {
	return fmt.Sprintf("%s: the first blocks and the later ones differ by %.2g times their random error, %.2g %% of |H|: "+
		"something warms up, loosens or settles: find out what, then start the average over",
		name, math.Sqrt(d.Ratio[n]), 100*d.Change[n])
}

// A partLine holds one line of a Part, factored, and the H of one response there.
type partLine struct {
	forces   *forceLine
	row, h   []complex128
	averages float64
	gyy, g2  float64
}

func newPartLine(q int) partLine {
	return partLine{forces: newForceLine(q), row: make([]complex128, q), h: make([]complex128, q)}
}

// factor takes line k's Gxx and tells whether it has an inverse.
func (l *partLine) factor(part *spectra.Part, k int) bool {
	f := l.forces
	q := len(f.s)
	l.averages = part.EffectiveAverages
	gxx := part.Gxx[k*q*q : (k+1)*q*q]
	for i := range q {
		f.s[i] = math.Sqrt(real(gxx[i*q+i]))
	}
	for i := range q {
		for j := range i + 1 {
			f.r[i*q+j] = gxx[i*q+j] / complex(f.s[i], 0) / complex(f.s[j], 0)
		}
	}
	if !cholesky(f.l, f.r, q) {
		return false
	}
	f.invert()
	var trace float64
	for _, v := range f.inverseR {
		trace += v
	}
	return trace < 1/minEigenvalue // the trace bounds the inverse of the smallest eigenvalue
}

// solve fills h with H1 of response o at line k.
func (l *partLine) solve(part *spectra.Part, k, o int) {
	q := len(l.h)
	p := len(part.Gyy) * q * q / len(part.Gxx)
	at := k*p + o
	explained := l.forces.solve(l.h, part.Gyx[at*q:(at+1)*q], l.row)
	l.gyy = part.Gyy[at]
	l.g2 = MultipleCoherence(explained, l.gyy)
}

// free is the degrees of freedom of its variances, complex ones.
func (l *partLine) free() float64 { return l.averages - float64(len(l.h)) }

// variance is that of h[i].
func (l *partLine) variance(i int) float64 {
	return HVariance(l.gyy, l.g2, l.forces.inverse(i), len(l.h), l.averages)
}

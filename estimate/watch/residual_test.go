package watch

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"slices"
	"sync"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/spectra/kernel"
)

// anyBlock is a block of noise beside a model of noise, whose gains are anything. each shares out the cells.
func anyBlock(t *rapid.T, workers int, each func(items int, do func(worker, item int))) *block {
	rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 5))
	value := func() complex128 { return complex(rng.NormFloat64(), rng.NormFloat64()) }
	q, p := rapid.IntRange(1, 5).Draw(t, "forces"), rapid.IntRange(1, 9).Draw(t, "responses")
	first, lines := rapid.IntRange(0, 3).Draw(t, "first"), rapid.IntRange(8, 99).Draw(t, "lines")
	l := &layout{q: q, p: p, rows: kernel.Whole(p), density: 0.3, cells: newCells(first, first+lines-1, rapid.IntRange(1, 2).Draw(t, "stride"))}
	m := newModel(l)
	m.ne = 20
	m.v = m.ne - float64(q)
	for n := range lines {
		for o := range p {
			for i := range q {
				m.h.Set(m.place(n), o, i, complex64(value()))
			}
			m.weight[n*l.rows+o] = float32(rng.ExpFloat64())
		}
		m.regular[n] = rng.IntN(9) > 0 && m.factor(n).factor(anyHermitian(rng, q))
	}
	b := newBlock(l, m, workers, each)
	b.lines = make([]complex128, (first+lines)*(q+p))
	level := rapid.SampledFrom([]float64{0.3, 5}).Draw(t, "level") // against the average
	for n := range b.lines {
		b.lines[n] = scaled(level, value())
	}
	return b
}

// oneByOne shares nothing out.
func oneByOne(items int, do func(worker, item int)) {
	for item := range items {
		do(0, item)
	}
}

// anyHermitian is positive definite.
func anyHermitian(rng *rand.Rand, q int) []complex128 {
	g := make([]complex128, q*q)
	for range 3 * q {
		x := make([]complex128, q)
		for i := range x {
			x[i] = complex(rng.NormFloat64(), rng.NormFloat64())
		}
		for i, a := range x {
			for j, b := range x {
				g[i*q+j] += a * cmplx.Conj(b)
			}
		}
	}
	return g
}

// definition is the sum of u over a cell of response o, as the comment of block says it.
func (b *block) definition(o, cell int, without uint64) (sum float64) {
	l, m := b.layout, b.model
	column := make([]complex128, l.q)
	lo, hi := l.cells.bounds(cell)
	for k := lo; k < hi; k += l.cells.stride {
		n := k - l.cells.first
		if !m.regular[n] {
			continue
		}
		x, r := b.lines[k*(l.q+l.p):][:l.q], b.lines[k*(l.q+l.p)+l.q+o]
		var h complex128
		for i := range x {
			if without>>i&1 == 0 {
				r -= m.at(n, o, i) * x[i]
			}
			m.factor(n).inverse(column, i)
			for j := range x {
				h += cmplx.Conj(x[j]) * column[j] * x[i]
			}
		}
		h *= complex(l.density/m.ne, 0)
		tOverV := abs2(r) * float64(m.weight[n*l.rows+o]) / ((1 + real(h)) * b.ratio)
		sum += m.v * math.Log1p(tOverV)
	}
	return sum
}

func TestEveryLineHasAPlaceOfItsOwn(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := anyBlock(t, 1, oneByOne).model
		c := m.layout.cells
		taken := make([]bool, c.stride*c.every())
		for n := range c.lines() {
			if at := m.place(n); taken[at] {
				t.Fatalf("two lines at %d", at)
			}
			taken[m.place(n)] = true
			if n%c.stride == 0 && m.place(n) != n/c.stride {
				t.Fatalf("judged line %d stands at %d", n, m.place(n))
			}
		}
	})
}

func TestSumsAreTheirDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := anyBlock(t, 1, oneByOne)
		l := b.layout
		without := rapid.Uint64Max(1<<l.q-1).Draw(t, "without")
		got := make([]float64, l.p*l.cells.n)
		b.take(b.lines)
		b.sums(got, without)
		for o := range l.p {
			for cell := range l.cells.n {
				want := b.definition(o, cell, without)
				// Gxx of few outer products may be near one without an inverse: of 16 digits these are left.
				if s := got[o*l.cells.n+cell]; math.Abs(s-want) > 1e-9*(1+want) {
					t.Fatalf("response %d, cell %d: %v, want %v", o, cell, s, want)
				}
			}
		}
	})
}

// TestSumsDoNotDependOnWorkers: to the last bit, whoever takes which cells.
func TestSumsDoNotDependOnWorkers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const workers = 3
		b := anyBlock(t, workers, oneByOne)
		b.take(b.lines)
		one, many := make([]float64, b.layout.p*b.layout.cells.n), make([]float64, b.layout.p*b.layout.cells.n)
		b.sums(one, 0)
		b.each = func(items int, do func(worker, item int)) {
			var done sync.WaitGroup
			for worker := range workers {
				done.Go(func() {
					for item := items - 1 - worker; item >= 0; item -= workers {
						do(worker, item)
					}
				})
			}
			done.Wait()
		}
		b.sums(many, 0)
		if !slices.Equal(one, many) {
			t.Fatalf("%v on one worker, %v on three", one, many)
		}
	})
}

// TestASilentResponse without a model is as it should be, and what is unknown on one does not reach others.
func TestASilentResponse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := anyBlock(t, 1, oneByOne)
		l, m := b.layout, b.model
		silent := rapid.IntRange(0, l.p-1).Draw(t, "silent")
		loud := rapid.IntRange(0, l.p-1).Draw(t, "loud")
		for k := range len(b.lines) / (l.q + l.p) {
			b.lines[k*(l.q+l.p)+l.q+loud] *= 1e150
			b.lines[k*(l.q+l.p)+l.q+silent] = 0
		}
		for n := range l.cells.lines() {
			for i := range l.q {
				m.h.Set(m.place(n), silent, i, 0)
			}
			m.weight[n*l.rows+silent] = 0
		}
		got := make([]float64, l.p*l.cells.n)
		b.take(b.lines)
		b.sums(got, 0)
		for n, s := range got {
			if o := n / l.cells.n; o == silent && s != 0 || !(s >= 0) || math.IsInf(s, 1) {
				t.Fatalf("response %d of which %d is silent and %d loud: %v", o, silent, loud, s)
			}
		}
	})
}

// TestSpreadIsItsDefinition: the mean z z^H of all judged lines, none of which has more power than mostPower.
func TestSpreadIsItsDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := anyBlock(t, 1, oneByOne)
		l, q := b.layout, b.layout.q
		for n := range b.lines {
			b.lines[n] = scaled(rapid.SampledFrom([]float64{0.1, 1, 100}).Draw(t, "part"), b.lines[n])
		}
		b.take(b.lines)
		want := make([]complex128, q*q)
		z := make([]complex128, q)
		for n := 0; n < l.cells.lines(); n += l.cells.stride {
			if !b.model.regular[n] {
				continue
			}
			copy(z, b.lines[(l.cells.first+n)*(l.q+l.p):])
			b.model.factor(n).forward(z)
			var power float64
			for _, v := range z {
				power += abs2(v) * l.density
			}
			share := l.density * float64(l.cells.stride) / float64(l.cells.lines()) * min(1, mostPower/power)
			for i := range z {
				for j := range z {
					want[i*q+j] += complex(share, 0) * z[i] * cmplx.Conj(z[j])
				}
			}
		}
		for n, v := range want {
			if cmplx.Abs(b.spread[n]-v) > 1e-12*(1+cmplx.Abs(v)) {
				t.Fatalf("%v, want %v", b.spread, want)
			}
		}
	})
}

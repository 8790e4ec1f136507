package watch

import (
	"math"
	"math/cmplx"

	"shakerwatch/spectra/kernel"
)

// A block is what a transformed block looks like beside the average: its forces' levels and, per response
// and cell, the sum of u over the cell's lines,
//
//	r = y - H x,  h = x^H Gxx^-1 x / n_e,  t = |r|² / (S (1 + h) max(1, power of the forces over what it is in the average))
//	u = v ln(1 + t/v)
//
// With x and y random t is F(2, 2v), and u therefore exponential with mean 1. The sum of u over a
// cell is one logarithm of a product.
type block struct {
	layout *layout
	model  *model

	lines  []complex128 // of the block under work
	levels levels
	gain   []float64    // (line) 1/((1 + h) max(1, power ratio))
	spread []complex128 // (i, j) mean z z^H
	share  float64      // from a line's product of z to its part in the mean
	ratio  float64      // power of the forces over what it is in the average, 1 at least
	taper  taper

	without uint64    // forces left out of the prediction, a bit each
	into    []float64 // (o, cell)
	product [][]float64
	x       [][]complex128
	each    func(items int, do func(worker, item int))
	chunk   func(worker, item int) // made once, so that a block allocates nothing
}

// chunkCells is how many cells a worker takes at a time.
const chunkCells = 4

// maxTerm bounds a factor 1 + t/v, so that no product of the up to 15 of a cell overflows.
const maxTerm = 1e18

func newBlock(l *layout, m *model, workers int, each func(items int, do func(worker, item int))) *block {
	b := &block{
		layout: l, model: m, levels: newLevels(l), each: each,
		gain: make([]float64, l.cells.lines()), taper: taper{channels: l.q + l.p},
		spread: make([]complex128, l.q*l.q), share: l.density * float64(l.cells.stride) / float64(l.cells.lines()),
	}
	for range workers {
		b.product = append(b.product, make([]float64, l.rows))
		b.x = append(b.x, make([]complex128, l.q))
	}
	b.chunk = b.sumChunk
	return b
}

// take looks at the forces of a block's transform.
func (b *block) take(lines []complex128) {
	l := b.layout
	if l.taper {
		lines = b.taper.of(lines)
	}
	b.lines = lines
	b.levels.take(b.model, lines)
	x := b.x[0]
	clear(b.spread)
	leverage := 1 / b.model.ne
	for n := 0; n < len(b.gain); n += l.cells.stride {
		b.gain[n] = 0
		if !b.model.regular[n] {
			continue
		}
		copy(x, lines[(l.cells.first+n)*(l.q+l.p):][:l.q])
		b.model.factor(n).forward(x)
		var power float64
		for _, z := range x {
			power += abs2(z)
		}
		power *= l.density
		b.gain[n] = 1 / (1 + leverage*power)
		b.spreadOut(x, power)
	}
	for i := range l.q {
		for j := range i {
			b.spread[j*l.q+i] = cmplx.Conj(b.spread[i*l.q+j])
		}
	}
	b.ratio = max(1, b.levels.ratio, b.largest())
	inverse := 1 / b.ratio
	for n := 0; n < len(b.gain); n += l.cells.stride {
		b.gain[n] *= inverse
	}
}

// mostPower bounds what one line adds to the mean below: beyond it lies one line of 10^8.
const mostPower = 20

// spreadOut adds z z^H of one line, j <= i, z = L^-1 x being the forces as the average would have them, independent and of
// power 1.
func (b *block) spreadOut(z []complex128, power float64) {
	share := b.share
	if power > mostPower {
		share *= mostPower / power
	}
	for i, a := range z {
		a = scaled(share, a)
		row := b.spread[i*len(z):][:i+1]
		for j, c := range z[:i+1] {
			row[j] += complex(real(a)*real(c)+imag(a)*imag(c), imag(a)*real(c)-real(a)*imag(c))
		}
	}
}

// largest bounds the largest eigenvalue of the mean of z z^H (Gershgorin; Golub and Van Loan, section 7.2), less what
// chance adds. Leakage at narrow modes grows by it when forces that were independent lock together, or the
// reverse.
func (b *block) largest() (most float64) {
	q := b.layout.q
	chance := b.layout.tied / float64(max(1, len(b.gain)))
	for i := range q {
		own := real(b.spread[i*q+i])
		sum := own
		for j := range q {
			if j != i {
				sum += math.Sqrt(max(0, abs2(b.spread[i*q+j])-chance*own*real(b.spread[j*q+j])))
			}
		}
		most = max(most, sum)
	}
	return most
}

// sums fills dst, (o, cell), with the sums of u, the forces in without left out of the prediction.
func (b *block) sums(dst []float64, without uint64) {
	b.into, b.without = dst, without
	b.each((b.layout.cells.n+chunkCells-1)/chunkCells, b.chunk)
}

func (b *block) sumChunk(worker, item int) {
	for cell := item * chunkCells; cell < min((item+1)*chunkCells, b.layout.cells.n); cell++ {
		b.sumCell(b.product[worker], b.x[worker], cell)
	}
}

func (b *block) sumCell(product []float64, x []complex128, cell int) {
	l, m := b.layout, b.model
	for o := range product {
		product[o] = 1
	}
	lo, hi := l.cells.bounds(cell)
	for k := lo; k < hi; k += l.cells.stride {
		n := k - l.cells.first
		line := b.lines[k*(l.q+l.p):][:l.q+l.p]
		m.h.MultiplyMisfits(product, m.place(n), line[l.q:], b.forces(x, line[:l.q]), m.weight[n*l.rows:][:l.rows], b.gain[n], maxTerm)
	}
	kernel.Logarithms(product)
	for o, v := range product[:l.p] {
		b.into[o*l.cells.n+cell] = m.v * v
	}
}

// forces are those of a line that the prediction is made of. x is scratch.
func (b *block) forces(x, line []complex128) []complex128 {
	if b.without == 0 {
		return line
	}
	copy(x, line)
	for i := range x {
		if b.without>>i&1 != 0 {
			x[i] = 0
		}
	}
	return x
}

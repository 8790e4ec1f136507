package main

import "fmt"

// The points of a transform in a pass, m elements apart: R8 is m elements in bytes, R9 three
// times that.
var apart = []address{{0, "(DI)"}, {0, "(DI)(R8*1)"}, {0, "(DI)(R8*2)"}, {0, "(DI)(R9*1)"}, {0, "(DI)(R8*4)"}}

// turned is v times the k-th factor of a point.
func (b *body) turned(v cvalue, k int) cvalue {
	return b.cturned(v, address{16 * (k - 1), "(SI)"})
}

// pass writes the loops around the inside of a pass: over the transforms, and over the points of
// each.
func pass(f *file, radix int, inside func(b *body)) {
	f.line("// func pass%dAVX2(x, turns []float64, m int)", radix)
	f.function(fmt.Sprintf("pass%dAVX2", radix), 56)
	f.code(
		"MOVQ x_base+0(FP), DI",
		"MOVQ x_len+8(FP), DX",
		"LEAQ (DI)(DX*8), DX",
		"MOVQ turns_base+24(FP), BX",
		"MOVQ turns_len+32(FP), CX",
		"LEAQ (BX)(CX*8), CX",
		"MOVQ m+48(FP), R8",
		"SHLQ $6, R8",
		"LEAQ (R8)(R8*2), R9",
		fmt.Sprintf("IMUL3Q $%d, R8, R10", radix-1), // from behind a transform's first points to the next one
	)
	f.line("transform:")
	f.code("MOVQ BX, SI")
	f.line("point:")
	b := &body{}
	inside(b)
	b.write(f)
	f.code(
		"ADDQ $64, DI",
		fmt.Sprintf("ADDQ $%d, SI", 16*(radix-1)),
		"CMPQ SI, CX",
		"JB point",
		"ADDQ R10, DI",
		"CMPQ DI, DX",
		"JB transform",
	)
	f.end()
}

func pass3(f *file) {
	pass(f, 3, func(b *body) {
		a1, a2 := b.cload(apart[1]), b.cload(apart[2])
		sum := b.csum(a1, a2)
		v := b.cscaled(b.cdifference(a1, a2), constant("sin3"))
		a0 := b.cload(apart[0])
		b.cstore(b.csum(a0, sum), apart[0])
		u := b.cdifference(a0, b.cscaled(sum, constant("half")))
		b.cstore(b.turned(b.csumMinusI(u, v), 1), apart[1])
		b.cstore(b.turned(b.csumPlusI(u, v), 2), apart[2])
	})
}

func pass4(f *file) {
	pass(f, 4, func(b *body) {
		a0, a2, a1, a3 := b.cload(apart[0]), b.cload(apart[2]), b.cload(apart[1]), b.cload(apart[3])
		s02, d02 := b.csum(a0, a2), b.cdifference(a0, a2)
		s13, d13 := b.csum(a1, a3), b.cdifference(a1, a3)
		b.cstore(b.csum(s02, s13), apart[0])
		b.cstore(b.turned(b.csumMinusI(d02, d13), 1), apart[1])
		b.cstore(b.turned(b.cdifference(s02, s13), 2), apart[2])
		b.cstore(b.turned(b.csumPlusI(d02, d13), 3), apart[3])
	})
}

// pass5 adds the first point from memory and writes it last: there are no registers for it.
func pass5(f *file) {
	pass(f, 5, func(b *body) {
		a1, a4 := b.cload(apart[1]), b.cload(apart[4])
		s1, d1 := b.csum(a1, a4), b.cdifference(a1, a4)
		a2, a3 := b.cload(apart[2]), b.cload(apart[3])
		s2, d2 := b.csum(a2, a3), b.cdifference(a2, a3)
		withFirst := func(v cvalue) cvalue { return cvalue{b.sum(v.re, apart[0].re()), b.sum(v.im, apart[0].im())} }
		pair := func(u, v cvalue, minus, plus int) {
			x, y := b.csumMinusI(u, v), b.csumPlusI(u, v)
			b.cstore(b.turned(x, minus), apart[minus])
			b.cstore(b.turned(y, plus), apart[plus])
		}
		pair(
			b.csum(withFirst(b.cscaled(s1, constant("cos5"))), b.cscaled(s2, constant("cos5b"))),
			b.csum(b.cscaled(d1, constant("sin5")), b.cscaled(d2, constant("sin5b"))),
			1, 4)
		pair(
			b.csum(withFirst(b.cscaled(s1, constant("cos5b"))), b.cscaled(s2, constant("cos5"))),
			b.cdifference(b.cscaled(d1, constant("sin5b")), b.cscaled(d2, constant("sin5"))),
			2, 3)
		b.cstore(b.csum(withFirst(s1), s2), apart[0])
	})
}

// The points of a transform in the last pass: side by side.
func beside(n int) address { return address{n * elementBytes, "(DI)"} }

func last(f *file, radix int, inside func(b *body)) {
	f.line("// func last%dAVX2(x []float64)", radix)
	f.function(fmt.Sprintf("last%dAVX2", radix), 24)
	f.code(
		"MOVQ x_base+0(FP), DI",
		"MOVQ x_len+8(FP), DX",
		"LEAQ (DI)(DX*8), DX",
	)
	f.line("transform:")
	b := &body{}
	inside(b)
	b.write(f)
	f.code(
		fmt.Sprintf("ADDQ $%d, DI", radix*elementBytes),
		"CMPQ DI, DX",
		"JB transform",
	)
	f.end()
}

func last2(f *file) {
	last(f, 2, func(b *body) {
		a0, a1 := b.cload(beside(0)), b.cload(beside(1))
		b.cstore(b.csum(a0, a1), beside(0))
		b.cstore(b.cdifference(a0, a1), beside(1))
	})
}

func last4(f *file) {
	last(f, 4, func(b *body) {
		y := b.four(beside(0), beside(1), beside(2), beside(3))
		for k, v := range y {
			b.cstore(v, beside(k))
		}
	})
}

// last8 keeps the transform of the even points in their places while the odd ones need the
// registers.
func last8(f *file) {
	last(f, 8, func(b *body) {
		for k, v := range b.four(beside(0), beside(2), beside(4), beside(6)) {
			b.cstore(v, beside(2*k))
		}
		odd := b.four(beside(1), beside(3), beside(5), beside(7))
		pair := func(k int, o cvalue) {
			e := b.cload(beside(2 * k))
			b.cstore(b.csum(e, o), beside(k))
			b.cstore(b.cdifference(e, o), beside(k+4))
		}
		o1, o2, o3 := odd[1], odd[2], odd[3]
		pair(1, cvalue{
			b.product(b.sum(o1.re, o1.im), constant("half8")),
			b.product(b.difference(o1.im, o1.re), constant("half8")),
		})
		pair(3, cvalue{
			b.product(b.difference(o3.im, o3.re), constant("half8")),
			b.product(b.sum(o3.re, o3.im), constant("minusHalf8")),
		})
		e := b.cload(beside(4))
		b.cstore(b.csumMinusI(e, o2), beside(2))
		b.cstore(b.csumPlusI(e, o2), beside(6))
		pair(0, odd[0])
	})
}

// four is the transform of four points.
func (b *body) four(p0, p1, p2, p3 address) [4]cvalue {
	a0, a2 := b.cload(p0), b.cload(p2)
	s02, d02 := b.csum(a0, a2), b.cdifference(a0, a2)
	a1, a3 := b.cload(p1), b.cload(p3)
	s13, d13 := b.csum(a1, a3), b.cdifference(a1, a3)
	return [4]cvalue{b.csum(s02, s13), b.csumMinusI(d02, d13), b.cdifference(s02, s13), b.csumPlusI(d02, d13)}
}

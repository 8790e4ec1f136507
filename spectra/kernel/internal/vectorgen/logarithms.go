package main

import "fmt"

// logarithms: an exponent becomes a number by way of the bits of 2^52 behind which it is put.
func logarithms(f *file) {
	f.line("// func logarithmsAVX2(x []float64)")
	f.function("logarithmsAVX2", 24)
	f.code(
		"MOVQ x_base+0(FP), DI",
		"MOVQ x_len+8(FP), DX",
		"LEAQ (DI)(DX*8), DX",
		"CMPQ DI, DX",
		"JGE done",
	)
	f.line("four:")
	b := &body{}
	x := b.load("(DI)")
	bits := b.do("VPADDQ", constant("oneLessRootHalf"), x)
	k := b.do("VPOR", constant("two52"), b.do("VPSRLQ", "$52", bits))
	k = b.difference(k, constant("two52Exponent"))
	m := b.do("VPADDQ", constant("rootHalf"), b.do("VPAND", constant("fraction"), bits))
	s := b.do("VDIVPD", b.sum(m, constant("one")), b.difference(m, constant("one")))
	square := b.product(s, s)
	series := b.load(constant(odd(19)))
	for n := 17; n >= 3; n -= 2 {
		series = b.sum(b.product(series, square), constant(odd(n)))
	}
	s = b.sum(s, s)
	series = b.sum(b.product(b.product(series, square), s), s)
	sum := b.sum(b.product(k, constant("ln2")), series)
	b.store(b.sum(sum, b.difference(x, x)), "(DI)")
	b.write(f)
	f.code(
		"ADDQ $32, DI",
		"CMPQ DI, DX",
		"JB four",
	)
	f.line("done:")
	f.end()
}

// odd is the name of the constant 1/n.
func odd(n int) string { return fmt.Sprintf("oneOver%d", n) }

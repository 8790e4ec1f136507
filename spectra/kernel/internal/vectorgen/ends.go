package main

import "fmt"

// transposed turns four registers of four numbers, row by row, into columns.
func (b *body) transposed(r [4]value) [4]value {
	low01, high01 := b.do("VUNPCKLPD", r[1], r[0]), b.do("VUNPCKHPD", r[1], r[0])
	low23, high23 := b.do("VUNPCKLPD", r[3], r[2]), b.do("VUNPCKHPD", r[3], r[2])
	return [4]value{
		b.do("VPERM2F128", "$0x20", low23, low01),
		b.do("VPERM2F128", "$0x20", high23, high01),
		b.do("VPERM2F128", "$0x31", low23, low01),
		b.do("VPERM2F128", "$0x31", high23, high01),
	}
}

func load(f *file) {
	f.line("// func loadAVX2(x, window []float64, from *[Lanes][]float64)")
	f.function("loadAVX2", 56)
	f.code(
		"MOVQ x_base+0(FP), DI",
		"MOVQ window_base+24(FP), SI",
		"MOVQ window_len+32(FP), CX",
		"MOVQ from+48(FP), AX",
		"MOVQ 0(AX), R8",
		"MOVQ 24(AX), R9",
		"MOVQ 48(AX), R10",
		"MOVQ 72(AX), R11",
		"XORQ DX, DX",
		"CMPQ DX, CX",
		"JGE done",
	)
	f.line("samples:")
	b := &body{}
	window := b.load("(SI)(DX*8)")
	var rows [4]value
	for l := range rows {
		rows[l] = b.product(window, fmt.Sprintf("(R%d)(DX*8)", 8+l))
	}
	for n, column := range b.transposed(rows) {
		b.store(column, address{32 * n, "(DI)"}.String())
	}
	b.write(f)
	f.code(
		"ADDQ $128, DI",
		"ADDQ $4, DX",
		"CMPQ DX, CX",
		"JLT samples",
	)
	f.line("done:")
	f.end()
}

func split(f *file) {
	f.line("// func splitAVX2(dst []complex128, stride int, z []float64, bins []bin)")
	f.function("splitAVX2", 80)
	f.code(
		"MOVQ dst_base+0(FP), DI",
		"MOVQ stride+24(FP), R8",
		"SHLQ $4, R8",
		"MOVQ z_base+32(FP), BX",
		"MOVQ bins_base+56(FP), SI",
		"MOVQ bins_len+64(FP), CX",
	)
	f.line("line:")
	f.code(
		"MOVLQSX 0(SI), R9",
		"MOVLQSX 4(SI), R10",
	)
	b := &body{}
	z, mirror := b.cload(address{0, "(BX)(R9*8)"}), b.cload(address{0, "(BX)(R10*8)"})
	even := cvalue{b.sum(z.re, mirror.re), b.difference(z.im, mirror.im)}
	odd := cvalue{b.difference(z.re, mirror.re), b.sum(z.im, mirror.im)}
	x := b.csum(even, b.cturned(odd, address{8, "(SI)"}))
	low, high := b.do("VUNPCKLPD", x.im, x.re), b.do("VUNPCKHPD", x.im, x.re)
	b.store(b.do("VPERM2F128", "$0x20", high, low), "(DI)")
	b.store(b.do("VPERM2F128", "$0x31", high, low), "32(DI)")
	b.write(f)
	f.code(
		"ADDQ $24, SI",
		"ADDQ R8, DI",
		"DECQ CX",
		"JNZ line",
	)
	f.end()
}

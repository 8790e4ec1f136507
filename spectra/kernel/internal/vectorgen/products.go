package main

import "fmt"

// outer takes up to four columns of x at a time, so that they stay in registers while y and the
// sums go past.
func outer(f *file) {
	f.line("// func outerAVX2(sums, y, x []complex128)")
	f.function("outerAVX2", 72)
	f.code(
		"MOVQ sums_base+0(FP), DI",
		"MOVQ y_base+24(FP), BX",
		"MOVQ y_len+32(FP), DX",
		"SHLQ $4, DX",
		"ADDQ BX, DX", // behind y
		"MOVQ x_base+48(FP), SI",
		"MOVQ x_len+56(FP), CX",
		"MOVQ CX, R8",
		"SHLQ $4, R8", // a row of sums in bytes
		"CMPQ BX, DX",
		"JGE done",
	)
	for _, columns := range []int{4, 2, 1} {
		f.line("columns%d:", columns)
		f.code(
			fmt.Sprintf("CMPQ CX, $%d", columns),
			fmt.Sprintf("JL fewer%d", columns),
		)
		outerColumns(f, columns)
		f.code(
			fmt.Sprintf("ADDQ $%d, SI", 16*columns),
			fmt.Sprintf("ADDQ $%d, DI", 16*columns),
			fmt.Sprintf("SUBQ $%d, CX", columns),
			fmt.Sprintf("JMP columns%d", columns),
		)
		f.line("fewer%d:", columns)
	}
	f.line("done:")
	f.end()
}

// outerColumns writes the loop over y. With x = a + ib and y = c + id, y x* is c·(a, -b) + d·(b, a).
func outerColumns(f *file, columns int) {
	register := "Y"
	if columns == 1 {
		register = "X"
	}
	pairs := (columns + 1) / 2
	for n := range pairs {
		conjugate, swapped := fmt.Sprintf("%s%d", register, 15-2*n), fmt.Sprintf("%s%d", register, 14-2*n)
		f.code(
			fmt.Sprintf("VMOVUPD %d(SI), %s", 32*n, conjugate),
			fmt.Sprintf("VPERMILPD $5, %s, %s", conjugate, swapped),
			fmt.Sprintf("VXORPD conjugate<>(SB), %s, %s", conjugate, conjugate),
		)
	}
	f.code("MOVQ BX, R9", "MOVQ DI, R10")
	f.line("row%d:", columns)
	f.code("VBROADCASTSD 0(R9), Y0", "VBROADCASTSD 8(R9), Y1")
	for n := range pairs {
		re, im := fmt.Sprintf("%s%d", register, 2+2*n), fmt.Sprintf("%s%d", register, 3+2*n)
		sum := fmt.Sprintf("%d(R10)", 32*n)
		f.code(
			fmt.Sprintf("VMULPD %s%d, %s0, %s", register, 15-2*n, register, re),
			fmt.Sprintf("VMULPD %s%d, %s1, %s", register, 14-2*n, register, im),
			fmt.Sprintf("VADDPD %s, %s, %s", im, re, re),
			fmt.Sprintf("VADDPD %s, %s, %s", sum, re, re),
			fmt.Sprintf("VMOVUPD %s, %s", re, sum),
		)
	}
	f.code(
		"ADDQ $16, R9",
		"ADDQ R8, R10",
		"CMPQ R9, DX",
		fmt.Sprintf("JB row%d", columns),
	)
}

// power adds two neighbouring squares in each half of a register, then sets them in order.
func power(f *file) {
	f.line("// func powerAVX2(sums []float64, y []complex128)")
	f.function("powerAVX2", 48)
	f.code(
		"MOVQ sums_base+0(FP), DI",
		"MOVQ sums_len+8(FP), DX",
		"LEAQ (DI)(DX*8), DX",
		"MOVQ y_base+24(FP), SI",
		"CMPQ DI, DX",
		"JGE done",
	)
	f.line("four:")
	b := &body{}
	y01, y23 := b.load("(SI)"), b.load("32(SI)")
	squares01, squares23 := b.product(y01, y01), b.product(y23, y23)
	powers := b.do("VPERMPD", "$0xd8", b.do("VHADDPD", squares23, squares01))
	b.store(b.sum(powers, "(DI)"), "(DI)")
	b.write(f)
	f.code(
		"ADDQ $64, SI",
		"ADDQ $32, DI",
		"CMPQ DI, DX",
		"JB four",
	)
	f.line("done:")
	f.end()
}

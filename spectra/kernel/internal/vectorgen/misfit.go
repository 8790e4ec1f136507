package main

import "fmt"

// misfit takes four rows at a time, those of the last group masked.
func misfit(f *file) {
	f.line("// func misfitAVX2(products []float64, y, x []complex128, values, weights []float32, gain, most float64)")
	f.function("misfitAVX2", 136)
	f.code(
		"MOVQ products_base+0(FP), DI",
		"MOVQ y_base+24(FP), BX",
		"MOVQ y_len+32(FP), DX",
		"MOVQ x_base+48(FP), SI",
		"MOVQ x_len+56(FP), CX",
		"SHLQ $4, CX",
		"ADDQ SI, CX", // behind x
		"MOVQ values_base+72(FP), R8",
		"MOVQ weights_base+96(FP), R9",
		"VBROADCASTSD gain+120(FP), Y15",
		"VBROADCASTSD most+128(FP), Y14",
		"SUBQ $4, DX",
		"JL fewer",
	)
	f.line("four:")
	f.code("VMOVUPD (BX), Y2", "VMOVUPD 32(BX), Y3")
	fourRows(f, "Four")
	f.code(
		"ADDQ $64, BX",
		"ADDQ $16, R9",
		"ADDQ $32, DI",
		"SUBQ $4, DX",
		"JGE four",
	)
	f.line("fewer:")
	f.code(
		"ADDQ $4, DX",
		"JZ done",
		"SHLQ $4, DX",
		"LEAQ leading<>+64(SB), R10",
		"SUBQ DX, R10",
		"VMOVUPD (R10), Y12",
		"VMOVUPD 32(R10), Y13",
		"VMASKMOVPD (BX), Y12, Y2",
		"VMASKMOVPD 32(BX), Y13, Y3",
	)
	fourRows(f, "Fewer")
	f.line("done:")
	f.end()
}

// fourRows keeps what is left of y, which Y2 and Y3 hold, in Y0 and Y1, real and imaginary parts, while the columns go
// past.
func fourRows(f *file, name string) {
	f.code(
		"VUNPCKLPD Y3, Y2, Y0",
		"VUNPCKHPD Y3, Y2, Y1",
		"VPERMPD $0xd8, Y0, Y0",
		"VPERMPD $0xd8, Y1, Y1",
		"MOVQ SI, AX",
		"CMPQ AX, CX",
		"JGE left"+name,
	)
	f.line("column%s:", name)
	f.code(
		"VCVTPS2PD (R8), Y2",
		"VCVTPS2PD 16(R8), Y3",
		"VBROADCASTSD (AX), Y4",
		"VBROADCASTSD 8(AX), Y5",
		"VMULPD Y4, Y2, Y6",
		"VMULPD Y5, Y3, Y7",
		"VSUBPD Y7, Y6, Y6",
		"VSUBPD Y6, Y0, Y0",
		"VMULPD Y5, Y2, Y8",
		"VMULPD Y4, Y3, Y9",
		"VADDPD Y9, Y8, Y8",
		"VSUBPD Y8, Y1, Y1",
		fmt.Sprintf("ADDQ $%d, R8", elementBytes/2), // of single precision
		"ADDQ $16, AX",
		"CMPQ AX, CX",
		"JB column"+name,
	)
	f.line("left%s:", name)
	f.code(
		"VMULPD Y0, Y0, Y0",
		"VMULPD Y1, Y1, Y1",
		"VADDPD Y1, Y0, Y0",
		"VCVTPS2PD (R9), Y2",
		"VMULPD Y2, Y0, Y0",
		"VMULPD Y15, Y0, Y0",
		"VMINPD Y0, Y14, Y0", // a NaN in Y0 stays
		"VADDPD "+constant("one")+", Y0, Y0",
		"VMULPD (DI), Y0, Y0",
		"VMOVUPD Y0, (DI)",
	)
}

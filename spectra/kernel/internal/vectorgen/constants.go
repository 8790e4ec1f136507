package main

import "math"

// The constants, by name: four times the same number, so that one can be an operand.
var constantTable = []struct {
	name  string
	value float64
}{
	{"half", 0.5},
	{"sin3", 0.86602540378443864676372317075293618347},
	{"cos5", 0.30901699437494742410229341718281905886},
	{"cos5b", -0.80901699437494742410229341718281905886},
	{"sin5", 0.95105651629515357211643933337938214340},
	{"sin5b", 0.58778525229247312916870595463907276860},
	{"half8", math.Sqrt2 / 2},
	{"minusHalf8", -math.Sqrt2 / 2},
	{"one", 1},
	{"ln2", math.Ln2},
	{"rootHalf", math.Sqrt2 / 2},
	{"oneLessRootHalf", math.Float64frombits(math.Float64bits(1) - math.Float64bits(math.Sqrt2/2))},
	{"fraction", math.Float64frombits(1<<52 - 1)},
	{"two52", 1 << 52},
	{"two52Exponent", 1<<52 + 1023}, // with the exponent that 1 has
	{odd(3), 1. / 3}, {odd(5), 1. / 5}, {odd(7), 1. / 7}, {odd(9), 1. / 9}, {odd(11), 1. / 11},
	{odd(13), 1. / 13}, {odd(15), 1. / 15}, {odd(17), 1. / 17}, {odd(19), 1. / 19},
}

// constant is the address of a constant.
func constant(name string) string { return name + "<>(SB)" }

func constants(f *file) {
	for _, c := range constantTable {
		f.line("")
		for lane := range 4 {
			f.line("DATA %s<>+%d(SB)/8, $0x%016x", c.name, 8*lane, math.Float64bits(c.value))
		}
		f.line("GLOBL %s<>(SB), RODATA|NOPTR, $32", c.name)
	}
	f.line("")
	f.line("// The sign bit of the imaginary parts of two complex numbers.")
	for word, v := range []uint64{0, 1 << 63, 0, 1 << 63} {
		f.line("DATA conjugate<>+%d(SB)/8, $0x%016x", 8*word, v)
	}
	f.line("GLOBL conjugate<>(SB), RODATA|NOPTR, $32")
	f.line("")
	f.line("// Masks of the leading 8 words and of none behind them.")
	for word := range 16 {
		f.line("DATA leading<>+%d(SB)/8, $0x%016x", 8*word, []uint64{math.MaxUint64, 0}[word/8])
	}
	f.line("GLOBL leading<>(SB), RODATA|NOPTR, $128")
}

package kernel

// AddOuter adds the products y[o] x[i]* to sums[o·len(x)+i]. It panics unless sums has
// len(y)·len(x) elements.
//
// The bits do not depend on the processor's instructions: see the package.
func AddOuter(sums, y, x []complex128) {
	if len(sums) != len(y)*len(x) {
		panic("kernel: sums differ from the products in number")
	}
	fastest.outer(sums, y, x)
}

// AddPower adds |y[o]|² to sums[o]. It panics unless sums is as long as y.
func AddPower(sums []float64, y []complex128) {
	if len(sums) != len(y) {
		panic("kernel: sums differ from the powers in number")
	}
	fastest.power(sums, y)
}

func outerPlain(sums, y, x []complex128) {
	for o, a := range y {
		row := sums[o*len(x):][:len(x)]
		for i, b := range x {
			row[i] += complex(
				float64(real(a)*real(b))+float64(imag(a)*imag(b)),
				float64(imag(a)*real(b))-float64(real(a)*imag(b)),
			)
		}
	}
}

func powerPlain(sums []float64, y []complex128) {
	for o, a := range y {
		sums[o] += float64(real(a)*real(a)) + float64(imag(a)*imag(a))
	}
}

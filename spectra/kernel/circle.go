package kernel

import "math"

// unit is e^{-2πi·k/n} for 0 <= k <= n. The angle is brought below an eighth of the circle in
// integers, so that the values of all eighths mirror each other to the last bit.
func unit(k, n int) complex128 {
	switch {
	case 2*k > n:
		u := unit(n-k, n)
		return complex(real(u), -imag(u))
	case 4*k > n:
		u := unit2(n-2*k, n) // the angle to half the circle, in steps of 1/(2n)
		return complex(-real(u), imag(u))
	}
	return unit2(2*k, n)
}

// unit2 is e^{-πi·k/n} for 0 <= k <= n/2.
func unit2(k, n int) complex128 {
	if 4*k > n {
		sin, cos := math.Sincos(math.Pi * float64(n-2*k) / float64(2*n))
		return complex(sin, -cos)
	}
	sin, cos := math.Sincos(math.Pi * float64(k) / float64(n))
	return complex(cos, -sin)
}

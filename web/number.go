package web

import (
	"math"
	"strconv"

	"shakerwatch/estimate"
)

// digits is how many significant digits travel: one more than a plot or a readout shows.
const digits = 5

// unknown is what estimate.Number writes for a number that cannot be had.
var unknown = func() []byte {
	text, err := estimate.Number(math.NaN()).MarshalJSON()
	if err != nil {
		panic("web: an unknown number has no JSON: " + err.Error())
	}
	return text
}()

// appendNumber appends v to dst, rounded to digits significant digits, or null where v is NaN or
// infinite.
func appendNumber(dst []byte, v float64) []byte {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return append(dst, unknown...)
	}
	return strconv.AppendFloat(dst, v, 'g', digits, 64)
}

// appendTime appends a time in seconds to the hundredth, however long the run, or null.
func appendTime(dst []byte, s float64) []byte {
	if math.IsNaN(s) || math.IsInf(s, 0) {
		return append(dst, unknown...)
	}
	return strconv.AppendFloat(dst, s, 'f', 2, 64)
}

// appendNumbers appends value(0) to value(n-1) as a JSON array.
func appendNumbers(dst []byte, n int, value func(i int) float64) []byte {
	dst = append(dst, '[')
	for i := range n {
		if i > 0 {
			dst = append(dst, ',')
		}
		dst = appendNumber(dst, value(i))
	}
	return append(dst, ']')
}

// orUnknown is v, or unknown where v is 0 and 0 means that there is none.
func orUnknown(v float64) estimate.Number {
	if v == 0 {
		return estimate.Number(math.NaN())
	}
	return estimate.Number(v)
}

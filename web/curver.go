package web

import (
	"math"
	"strconv"

	"shakerwatch/estimate"
)

// A curver writes the curves of one set of estimates, each as an array with one element for each point
// of a grid: whole numbers of the curve's step, see plot.go, and null where a value cannot be had. A
// curve that is the same at all points is that one number, or null. It owns its scratch memory and
// serves one goroutine.
type curver struct {
	e       *estimate.Estimates
	spectra []float64 // (L,q) N²/Hz
	scatter *scatter  // nil but with periodic excitation
	errors  []float64 // (p) of each response's worst frequency response

	isSpread     bool      // what follows is filled in
	worst, tenth []float64 // (L) over all responses
	worstOf      []int     // (L) the response that has worst
	values       []float64 // (p) scratch
	lines        []int     // scratch
	heat         heat      // scratch
}

// take has the curves be those of e from now on.
func (c *curver) take(e *estimate.Estimates) {
	c.e, c.isSpread = e, false
}

// spread fills in the coherence over all responses, line by line.
func (c *curver) spread() {
	if c.isSpread {
		return
	}
	c.isSpread = true
	p := c.e.Responses
	for k := range c.worst {
		c.worst[k], c.worstOf[k], c.tenth[k] = worstAndTenth(c.e.MultipleCoherence[k*p:(k+1)*p], c.values)
	}
}

// A values is a curve by line; a pick appends the lines at which it is shown, such as grid.lowest.
type (
	values func(line int) float64
	pick   func(dst []int, value func(line int) float64) []int
)

// at is column i of an array that has n values a line.
func at(array []float64, n, i int) values {
	return func(line int) float64 { return array[line*n+i] }
}

// curve writes one curve under a name, with a comma behind, and leaves its lines in c.lines.
func (c *curver) curve(dst []byte, name string, step float64, pick pick, value values) []byte {
	c.lines = pick(c.lines[:0], value)
	return c.there(dst, name, step, value)
}

// there writes a curve at the lines of the one before.
func (c *curver) there(dst []byte, name string, step float64, value values) []byte {
	return append(c.numbers(appendName(dst, name), step, value), ',')
}

// list writes n curves under one name, with a comma behind.
func (c *curver) list(dst []byte, name string, step float64, n int, pick pick, value func(i int) values) []byte {
	dst = append(appendName(dst, name), '[')
	for i := range n {
		if i > 0 {
			dst = append(dst, ',')
		}
		c.lines = pick(c.lines[:0], value(i))
		dst = c.numbers(dst, step, value(i))
	}
	return append(dst, `],`...)
}

func (c *curver) numbers(dst []byte, step float64, value values) []byte {
	return appendSteps(dst, len(c.lines), step, func(i int) float64 { return value(c.lines[i]) })
}

// appendSteps appends value(0) to value(n-1) as whole numbers of a step, as a JSON array, or as one
// number when all are the same. With step 0 they are rounded to fewDigits instead.
func appendSteps(dst []byte, n int, step float64, value func(i int) float64) []byte {
	start := len(dst)
	dst = append(dst, '[')
	same, first := true, ""
	for i := range n {
		if i > 0 {
			dst = append(dst, ',')
		}
		from := len(dst)
		dst = appendStep(dst, step, value(i))
		if i == 0 {
			first = string(dst[from:])
		}
		same = same && string(dst[from:]) == first
	}
	if n > 1 && same {
		return append(dst[:start], first...)
	}
	return append(dst, ']')
}

// fewDigits are what a scale of powers of ten can show of a number.
const fewDigits = 3

// mostSteps is where whole numbers end that a page can tell from their neighbours.
const mostSteps = 1 << 53

func appendStep(dst []byte, step, v float64) []byte {
	n := math.Round(v / step)
	switch {
	case math.IsNaN(v), math.IsInf(v, 0), step > 0 && math.Abs(n) > mostSteps:
		return append(dst, unknown...)
	case step == 0:
		return strconv.AppendFloat(dst, v, 'g', fewDigits, 64)
	}
	return strconv.AppendInt(dst, int64(n), 10)
}

// appendName appends the name of a field, which needs no escapes.
func appendName(dst []byte, name string) []byte {
	return append(strconv.AppendQuote(dst, name), ':')
}

// appendInts appends the elements of array at the given lines.
func appendInts(dst []byte, lines, array []int) []byte {
	dst = append(dst, '[')
	for i, line := range lines {
		if i > 0 {
			dst = append(dst, ',')
		}
		dst = strconv.AppendInt(dst, int64(array[line]), 10)
	}
	return append(dst, ']')
}

// inDecibels is a curve of powers in dB.
func inDecibels(power values) values {
	return func(line int) float64 { return powerDecibels(power(line)) }
}

func powerDecibels(power float64) float64 { return 10 * math.Log10(power) }

// decibels is a size in dB. It is -Inf for 0, which travels as unknown.
func decibels(size float64) float64 { return 20 * math.Log10(size) }

// ranking writes the errors of the responses, in rig order.
func (c *curver) ranking(dst []byte) []byte {
	dst = appendSteps(appendName(dst, "ranking.error"), len(c.errors), 0, func(o int) float64 { return 100 * c.errors[o] })
	return append(dst, ',')
}

package web

import (
	"math"
	"math/cmplx"
	"strconv"

	"shakerwatch/estimate"
)

// A curver writes the curves of one set of estimates, each as an array of numbers, one for each point
// of a grid, and null where a number cannot be had. It owns its scratch memory and serves one
// goroutine.
type curver struct {
	e       *estimate.Estimates
	spectra []float64 // (L,q) N²/Hz

	worst, tenth []float64 // (L) over all responses
	worstOf      []int     // (L) the response that has worst
	values       []float64 // (p) scratch
	lines        []int     // scratch
}

// spread fills in the coherence over all responses, line by line.
func (c *curver) spread() {
	p := c.e.Responses
	for k := range c.worst {
		row := c.e.MultipleCoherence[k*p : (k+1)*p]
		c.worstOf[k] = lowestLine(0, p, func(o int) float64 { return row[o] })
		copy(c.values, row)
		c.worst[k], c.tenth[k] = worstAndTenth(c.values)
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

// common writes the curves that all pages with the same grid show.
func (c *curver) common(dst []byte, g grid) []byte {
	e, q := c.e, c.e.Forces
	dst = c.curve(dst, "coherence.worst", g.lowest, at(c.worst, 1, 0))
	dst = appendInts(append(dst, `"coherence.worst_of":`...), c.lines, c.worstOf)
	dst = c.curve(append(dst, ','), "coherence.tenth", g.lowest, at(c.tenth, 1, 0))
	dst = c.curve(dst, "independence.condition", g.highest, at(e.ForceCondition, 1, 0))
	dst = c.curve(dst, "independence.raw", g.highest, at(e.ForceConditionRaw, 1, 0))
	dst = c.list(dst, "independence.force", q, g.highest, func(i int) values { return at(e.ForceCoherence, q, i) })
	dst = c.list(dst, "forces.spectrum", q, g.extremes, func(i int) values { return inDecibels(at(c.spectra, q, i)) })
	return c.list(dst, "forces.principal", q, g.extremes, func(i int) values { return inDecibels(at(e.PrincipalForces, q, i)) })
}

// chosen writes the curves of what a page chose.
func (c *curver) chosen(dst []byte, v view) []byte {
	g, p := v.grid(), c.e.Responses
	dst = c.list(dst, "coherence.shown", v.shownCount(), g.lowest, func(i int) values {
		return at(c.e.MultipleCoherence, p, v.shown[i])
	})
	dst = c.response(dst, g, v.response, v.force)
	if len(c.e.ReciprocityPairs) == 0 {
		return dst
	}
	return c.reciprocity(dst, g, v.pair)
}

// lowestShare is where the band's lower edge ends when one standard deviation reaches down to nothing:
// 20 dB below, where nobody takes the size for known.
const lowestShare = 0.1

// response writes size, phase and band of one frequency response. Where lines are thinned, all
// are those of the lines whose size is smallest or largest, so that they belong together.
func (c *curver) response(dst []byte, g grid, response, force int) []byte {
	stride := c.e.Responses * c.e.Forces
	n := response*c.e.Forces + force
	h := func(line int) complex128 { return c.e.H[line*stride+n] }
	size := func(line int) float64 { return cmplx.Abs(h(line)) }
	err := at(c.e.RandomError, stride, n)

	dst = c.curve(dst, "response.size", g.extremes, func(line int) float64 { return decibels(size(line)) })
	dst = c.there(dst, "response.phase", func(line int) float64 { return degrees(h(line)) })
	dst = c.there(dst, "response.low", func(line int) float64 {
		return decibels(size(line) * max(1-err(line), lowestShare))
	})
	return c.there(dst, "response.high", func(line int) float64 { return decibels(size(line) * (1 + err(line))) })
}

func (c *curver) reciprocity(dst []byte, g grid, pair int) []byte {
	dst = c.curve(dst, "reciprocity.ab", g.extremes, func(line int) float64 {
		ab, _ := c.e.Sides(line, pair)
		return decibels(cmplx.Abs(ab))
	})
	dst = c.curve(dst, "reciprocity.ba", g.extremes, func(line int) float64 {
		_, ba := c.e.Sides(line, pair)
		return decibels(cmplx.Abs(ba))
	})
	err := at(c.e.ReciprocityError, len(c.e.ReciprocityPairs), pair)
	return c.curve(dst, "reciprocity.error", g.highest, func(line int) float64 { return 100 * err(line) })
}

// curve writes one curve under a name, with a comma behind, and leaves its lines in c.lines.
func (c *curver) curve(dst []byte, name string, pick pick, value values) []byte {
	c.lines = pick(c.lines[:0], value)
	return c.there(dst, name, value)
}

// there writes a curve at the lines of the one before.
func (c *curver) there(dst []byte, name string, value values) []byte {
	dst = appendName(dst, name)
	return append(c.numbers(dst, value), ',')
}

// list writes n curves under one name, with a comma behind.
func (c *curver) list(dst []byte, name string, n int, pick pick, value func(i int) values) []byte {
	dst = append(appendName(dst, name), '[')
	for i := range n {
		if i > 0 {
			dst = append(dst, ',')
		}
		c.lines = pick(c.lines[:0], value(i))
		dst = c.numbers(dst, value(i))
	}
	return append(dst, `],`...)
}

func (c *curver) numbers(dst []byte, value values) []byte {
	return appendNumbers(dst, len(c.lines), func(i int) float64 { return value(c.lines[i]) })
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

// degrees is the phase of h, from -180 to 180, NaN where h is 0.
func degrees(h complex128) float64 {
	if h == 0 {
		return math.NaN()
	}
	return cmplx.Phase(h) * 180 / math.Pi
}

package watch

import (
	"cmp"
	"math"
	"slices"
)

// twins finds channels that are constant, and pairs that carry the same signal, in the transform of one
// block. It looks at a few lines all over the band.
type twins struct {
	layout *layout
	lines  []int
	dead   []bool    // by channel, of the last block
	key    []float64 // by channel: much the same for the same signal, whatever its gain
	order  []int     // channels, by key
	errors []float64
	found  []bool // by channel: has a twin before it
}

const (
	// sampledLines tell a signal from another: noise that agrees on 48 independent lines is the same noise. With fewer
	// than leastSampled nothing is said.
	sampledLines = 48
	leastSampled = 8

	// constantPower is the power of a line against that at 0 Hz below which it is rounding: a converter's
	// smallest step in 24 bits stands 8 decades above it.
	constantPower = 1e-22

	// twinPower is the median error, as a power, with which one channel is another times a constant. Two sensors
	// on one stiff part differ by more at most frequencies.
	twinPower = 1e-3

	// exactPower is the same for a force and a response: a force that is lost is the acceleration there times a small
	// mass, and no twin.
	exactPower = 1e-12

	// twinKeys is how far apart the keys of two twins can be.
	twinKeys = 0.1
)

func newTwins(l *layout) *twins {
	c := l.q + l.p
	t := &twins{
		layout: l, dead: make([]bool, c), key: make([]float64, c), order: make([]int, 0, c), found: make([]bool, c),
	}
	n := min(sampledLines, l.cells.lines())
	for i := range n {
		t.lines = append(t.lines, l.cells.first+(2*i+1)*l.cells.lines()/(2*n))
	}
	t.errors = make([]float64, len(t.lines))
	return t
}

// find appends what it finds in a block.
func (t *twins) find(dst []finding, lines []complex128) []finding {
	if len(t.lines) < leastSampled {
		return dst
	}
	t.order = t.order[:0]
	for ch := range t.dead {
		t.dead[ch] = t.constant(lines, ch)
		if t.dead[ch] {
			dst = append(dst, finding{kind: DeadChannel, key: ch, channels: []int{ch}})
			continue
		}
		t.order = append(t.order, ch)
	}
	slices.SortFunc(t.order, func(a, b int) int { return cmp.Compare(t.key[a], t.key[b]) })
	clear(t.found)
	for n, a := range t.order {
		for _, b := range t.order[n+1:] {
			if !(t.key[b]-t.key[a] < twinKeys) {
				break
			}
			lo, hi := min(a, b), max(a, b)
			if t.same(lines, lo, hi) && !t.found[hi] {
				t.found[hi] = true
				dst = append(dst, finding{kind: TwinChannels, key: hi, channels: []int{lo, hi}})
			}
		}
	}
	return dst
}

// constant tells whether a channel is, and fills its key: how its power is shared between two sets of lines, in
// logarithms so that one resonance does not decide.
func (t *twins) constant(lines []complex128, ch int) bool {
	c := t.layout.q + t.layout.p
	at0 := abs2(lines[ch])
	var key float64
	constant := true
	for n, k := range t.lines {
		power := abs2(lines[k*c+ch])
		constant = constant && power <= constantPower*at0
		if n%2 == 0 {
			key += math.Log(power + math.SmallestNonzeroFloat64)
		} else {
			key -= math.Log(power + math.SmallestNonzeroFloat64)
		}
	}
	t.key[ch] = key / float64(len(t.lines))
	return constant
}

// hasty is how many lines that disagree are enough to give up, if fewer agreed: of many channels, most pairs
// must be told apart quickly.
const hasty = 4

// same tells whether channel b is channel a times a real constant, but for little noise.
func (t *twins) same(lines []complex128, a, b int) bool {
	c := t.layout.q + t.layout.p
	bad := 0
	for n, k := range t.lines {
		x, y := lines[k*c+a], lines[k*c+b]
		re, im := real(x)*real(y)+imag(x)*imag(y), imag(y)*real(x)-real(y)*imag(x)
		if im*im > 4*twinPower*re*re {
			bad++
		}
		if bad >= hasty && 2*bad > n {
			return false
		}
		t.errors[n] = re / abs2(x)
	}
	slices.Sort(t.errors)
	gain := t.errors[len(t.errors)/2]
	for n, k := range t.lines {
		x, y := lines[k*c+a], lines[k*c+b]
		t.errors[n] = abs2(y-complex(gain, 0)*x) / abs2(y)
	}
	slices.Sort(t.errors)
	limit := twinPower
	if a < t.layout.q && b >= t.layout.q {
		limit = exactPower
	}
	return t.errors[len(t.errors)/2] < limit
}

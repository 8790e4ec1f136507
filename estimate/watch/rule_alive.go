package watch

import (
	"cmp"
	"slices"

	"shakerwatch/spectra/kernel"
)

// twins finds channels that are constant, and pairs that carry the same signal, in the transform of one
// block. It looks at a few lines all over the band.
type twins struct {
	layout *layout
	lines  []int
	dead   []bool    // by channel, of the last block
	key    []float64 // by channel: much the same for the same signal, whatever its gain
	order  []int     // channels, by key
	mean   []float64 // by channel: power of a line
	ratios []float64 // scratch, by line
	found  []bool    // by channel: has a twin before it
}

const (
	// sampledLines tell a signal from another: noise that agrees on 48 independent lines is the same noise. With fewer
	// than leastSampled nothing is said.
	sampledLines = 48
	leastSampled = 8

	// constantPower is the power of a line against that at 0 Hz below which it is rounding: a converter's
	// smallest step in 24 bits stands 8 decades above it.
	constantPower = 1e-22

	// Two inputs with one cable between them differ by a real constant and little else, at every frequency: by twinPower of
	// a line's power, since their filters are not quite alike (-60 dB is a phase of 0.06 degrees), and by twinFloor of the
	// channel's mean power, their converters' noise. Two sensors that move in parallel differ by more: by what they
	// measure at some frequencies, and by their own noise, which is rarely 70 dB down.
	twinPower, twinFloor = 1e-6, 1e-8

	// exactPower and exactFloor are the same for a force and a response: a force that is lost is the acceleration there
	// times a small mass, and no twin. Samples of 24 bits round to less.
	exactPower, exactFloor = 1e-12, 1e-13

	// twinKeys is how far apart the keys of two twins can be. keyFloor, of the mean power, is far above what they
	// differ by.
	twinKeys, keyFloor = 0.1, 1e-5

	// leastPower, of a silent channel, has a logarithm.
	leastPower = 1e-300
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
	t.mean, t.ratios = make([]float64, c), make([]float64, len(t.lines))
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

// constant tells whether a channel is, and fills its mean power and its key: how its power is shared between two sets
// of lines, in logarithms so that one resonance does not decide, and above keyFloor so that noise does not.
func (t *twins) constant(lines []complex128, ch int) bool {
	c := t.layout.q + t.layout.p
	at0 := abs2(lines[ch])
	constant, sum := true, 0.0
	for _, k := range t.lines {
		power := abs2(lines[k*c+ch])
		constant = constant && power <= constantPower*at0
		sum += power
	}
	t.mean[ch] = sum / float64(len(t.lines))
	key, floor := 0.0, keyFloor*t.mean[ch]+leastPower
	for n, k := range t.lines {
		t.ratios[n] = abs2(lines[k*c+ch]) + floor
	}
	kernel.Logarithms(t.ratios)
	for n, power := range t.ratios {
		if n%2 == 0 {
			key += power
		} else {
			key -= power
		}
	}
	t.key[ch] = key / float64(len(t.lines))
	return constant
}

// same tells whether channel b is channel a times a real constant, but for what two inputs differ by. The phase alone
// tells most pairs apart on the first lines.
func (t *twins) same(lines []complex128, a, b int) bool {
	c := t.layout.q + t.layout.p
	power, floor := twinPower, twinFloor
	if a < t.layout.q && b >= t.layout.q {
		power, floor = exactPower, exactFloor
	}
	floor *= t.mean[b]
	for n, k := range t.lines {
		x, y := lines[k*c+a], lines[k*c+b]
		re, im := real(x)*real(y)+imag(x)*imag(y), imag(y)*real(x)-real(y)*imag(x)
		if !(im*im <= (power*abs2(y)+floor)*abs2(x)) { // |y - g x|² for the best real g
			return false
		}
		t.ratios[n] = re / abs2(x)
	}
	slices.Sort(t.ratios)
	gain := complex(t.ratios[len(t.ratios)/2], 0)
	for _, k := range t.lines {
		x, y := lines[k*c+a], lines[k*c+b]
		if !(abs2(y-gain*x) <= power*abs2(y)+floor) {
			return false
		}
	}
	return true
}

package watch

// A follower tells whether a force that fell only follows the others, where no driving-point response can: by its
// coherence with them over a few blocks.
type follower struct {
	layout *layout
	force  int // under suspicion, -1 is none
	blocks int // in a row
	last   int64
	gxx    []complex128 // (line, i, j), j <= i
	factor lower
	column []complex128
}

func newFollower(l *layout) *follower {
	return &follower{
		layout: l, force: -1, gxx: make([]complex128, l.cells.lines()*l.q*l.q),
		factor: lower{l.q, make([]complex128, l.q*l.q)}, column: make([]complex128, l.q),
	}
}

// add takes a block in which force i is low. It tells whether it can be told yet that i follows, and if so,
// whether it does. The first blocks may hold the fall itself.
func (f *follower) add(i int, lines []complex128, block int64, perBlock float64) (told, follows bool) {
	if f.force != i || block-f.last > 1 {
		clear(f.gxx)
		f.force, f.blocks = i, 0
	}
	f.last = block
	f.blocks++
	counted := f.blocks - f.layout.overlap
	if counted < 1 {
		return false, false
	}
	l := f.layout
	for n := range l.cells.lines() {
		x := lines[(l.cells.first+n)*(l.q+l.p):][:l.q]
		addProducts(f.gxx[n*l.q*l.q:(n+1)*l.q*l.q], x, 1)
	}
	if counted < l.q+2 {
		return false, false
	}
	return true, f.coherence(i, perBlock*float64(counted)) > passiveShare
}

// coherence is the mean of that of force i with the others in ne averages, less what chance gives.
func (f *follower) coherence(i int, ne float64) float64 {
	q := f.layout.q
	var sum, lines float64
	for n := range f.layout.cells.lines() {
		g := f.gxx[n*q*q : (n+1)*q*q]
		c := 1.0 // without an inverse it depends as much as can be
		if f.factor.factor(g) {
			c = max(0, 1-1/(real(g[i*q+i])*f.factor.inverseOwn(f.column, i)))
		}
		sum += c
		lines++
	}
	chance := min(float64(q-1)/ne, 0.99)
	return (sum/lines - chance) / (1 - chance)
}

// addProducts adds x x^H to the lower triangle of g, which keeps so much of what it was.
func addProducts(g, x []complex128, keep float64) {
	for i, a := range x {
		for j := range i + 1 {
			b, v := x[j], g[i*len(x)+j]
			g[i*len(x)+j] = complex(
				keep*real(v)+real(a)*real(b)+imag(a)*imag(b),
				keep*imag(v)+imag(a)*real(b)-real(a)*imag(b))
		}
	}
}

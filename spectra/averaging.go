package spectra

// Averaging says how blocks are averaged and what is kept besides their mean products. The zero
// Averaging weighs all blocks alike and keeps nothing else.
type Averaging struct {
	// Memory is the number of blocks that exponential averaging remembers: a block weighs
	// (1 - 1/Memory)^j, j its age in blocks. 0 weighs all alike; 1 is not allowed.
	Memory int

	// Pairs are pairs (o, n) of responses whose cross-densities are kept.
	Pairs [][2]int

	// Halves keeps the averages of the first and of the other blocks apart. Not with Memory.
	Halves bool

	// Periods is the number of periods in which a periodic block comes, K; the scatter between them
	// is kept. 0 is a block without periods; 1 is not allowed.
	Periods int
}

// decay is by how much all earlier blocks' weight falls with each block.
func (a Averaging) decay() float64 {
	if a.Memory == 0 {
		return 1
	}
	return 1 - 1/float64(a.Memory)
}

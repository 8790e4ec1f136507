package decimate

// A phase counts the input frames of one stage down to its next output.
type phase struct {
	factor int64 // input frames from one output to the next
	wait   int64 // input frames until the next output, 1 to factor
}

// advance counts n input frames and returns how many outputs they complete.
func (p *phase) advance(n int64) int64 {
	if n < p.wait {
		p.wait -= n
		return 0
	}
	n -= p.wait
	p.wait = p.factor - n%p.factor
	return 1 + n/p.factor
}

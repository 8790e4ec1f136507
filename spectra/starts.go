package spectra

import "iter"

// Starts is the list of the blocks in an average, each by its first source frame, in the order in
// which they were added. Equally spaced starts are kept as one run, so that the list of a long
// undisturbed average stays short. The zero Starts is empty.
type Starts struct {
	runs []run
	n    int
}

type run struct{ first, step, n int64 }

func (r run) last() int64 { return r.first + (r.n-1)*r.step }

// Append adds a block. It panics when start does not lie behind the last one.
func (s *Starts) Append(start int64) {
	if s.n > 0 && start <= s.Last() {
		panic("spectra: block starts must grow")
	}
	s.n++
	if k := len(s.runs) - 1; k >= 0 {
		r := &s.runs[k]
		step := start - r.last()
		if r.n == 1 || step == r.step {
			r.step = step
			r.n++
			return
		}
	}
	s.runs = append(s.runs, run{first: start, n: 1})
}

// Len is the number of blocks.
func (s *Starts) Len() int { return s.n }

// Last is the start of the newest block. It panics when there is none.
func (s *Starts) Last() int64 { return s.runs[len(s.runs)-1].last() }

// All gives the starts in order.
func (s *Starts) All() iter.Seq[int64] {
	return func(yield func(int64) bool) {
		for _, r := range s.runs {
			for k := range r.n {
				if !yield(r.first + k*r.step) {
					return
				}
			}
		}
	}
}

// copyTo makes dst equal to s, in dst's memory where it is large enough.
func (s *Starts) copyTo(dst *Starts) {
	dst.runs = append(dst.runs[:0], s.runs...)
	dst.n = s.n
}

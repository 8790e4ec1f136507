package rig

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// A Mistake is one thing that is wrong in a rig file, where, and what to do about it.
type Mistake struct {
	Path string // of the file, as given
	Line int    // from 1
	Text string // one line: "what is wrong: what to do"
}

func (m Mistake) String() string { return fmt.Sprintf("%s:%d: %s", m.Path, m.Line, m.Text) }

// Mistakes are all the mistakes of one rig file.
type Mistakes []Mistake

// Error gives one line a mistake, sorted by line of the file.
func (m Mistakes) Error() string {
	lines := make([]string, len(m))
	for i, mistake := range m.sorted() {
		lines[i] = mistake.String()
	}
	return strings.Join(lines, "\n")
}

func (m Mistakes) sorted() Mistakes {
	s := slices.Clone(m)
	slices.SortStableFunc(s, func(a, b Mistake) int { return cmp.Compare(a.Line, b.Line) })
	return s
}

// A report collects mistakes while a file is read.
type report struct {
	path     string
	mistakes Mistakes

	// unread is set when a syntax error hides the rest of the file: what seems to be missing may
	// be there.
	unread bool
}

func (r *report) add(line int, format string, args ...any) {
	r.mistakes = append(r.mistakes, Mistake{r.path, max(line, 1), fmt.Sprintf(format, args...)})
}

func (r *report) err() error {
	if len(r.mistakes) == 0 {
		return nil
	}
	return r.mistakes.sorted()
}

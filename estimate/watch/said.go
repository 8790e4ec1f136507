package watch

import (
	"fmt"
	"strings"
)

// said is what sentences are made of.
type said struct {
	*finding
	names  string // of the channels: "S2", "A3z and A5z"
	points string // of the first channel: "point 14"
	sinceS float64
	e      Evidence // on the block that raised or cleared it
}

// maxNamed is how many channels a sentence names; a person looks at the first ones first.
const maxNamed = 4

// list is "a", "a and b", "a, b and 3 more".
func list(names []string) string {
	switch n := len(names); {
	case n == 0:
		return ""
	case n == 1:
		return names[0]
	case n <= maxNamed:
		return strings.Join(names[:n-1], ", ") + " and " + names[n-1]
	default:
		return fmt.Sprintf("%s and %d more", strings.Join(names[:maxNamed], ", "), n-maxNamed)
	}
}

// since is " since 61.5 s".
func (s said) since() string { return fmt.Sprintf("since %.1f s", s.sinceS) }

// bands is "210 to 218 Hz, 300 to 304 Hz", or "the whole band".
func (s said) bands() string {
	if len(s.bandsHz) == 0 {
		return "the whole band"
	}
	var parts []string
	for _, b := range s.bandsHz {
		parts = append(parts, fmt.Sprintf("%.4g to %.4g Hz", b[0], b[1]))
	}
	return list(parts)
}

package demo

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"shakerwatch/acquire/rig"
)

// A broken is a fault on a rig: its names resolved, its times in frames, with what it remembers from
// frame to frame.
type broken struct {
	Fault
	from, to int64 // frames; to is behind the last one
	shakers  []int // the forces among its targets
	outputs  []int // channels, forces first
	modes    []int
	at       dof // where a hammer strikes
	flutters []*flutter
	ties     []tie
}

const never = math.MaxInt64

// newBroken finds the fault's targets on the source. What is wrong is reported with the fault's text.
func (s *Source) newBroken(f Fault) (*broken, error) {
	b := &broken{Fault: f}
	err := f.check()
	if err == nil {
		err = s.resolve(b)
	}
	if err != nil {
		return nil, fmt.Errorf("fault %q: %w", f.String(), err)
	}
	b.Target = slices.Clone(f.Target)
	b.times(s.rateHz, s.now)
	for _, o := range b.outputs {
		if f.Kind == "loose" {
			label := "fault " + f.String() + " " + s.names[o]
			b.flutters = append(b.flutters, newFlutter(f.orUsual(), s.rateHz, stream(s.seed, label)))
		}
	}
	if f.Kind == "tied" || f.Kind == "tied-band" {
		for _, follower := range b.shakers[1:] {
			b.ties = append(b.ties, s.newTie(&f, b.shakers[0], follower))
		}
	}
	return b, nil
}

// times puts the fault's times into frames. What happens once happens now where its time has passed.
func (b *broken) times(rateHz float64, now int64) {
	b.from, b.to = int64(math.Round(b.FromS*rateHz)), never
	k, _ := kindNamed(b.Kind)
	if brief := b.Kind == "lost" && b.ToS == 0; brief || k.once {
		b.from = max(b.from, now)
		if brief {
			b.to = b.from + int64(math.Round(b.orUsual()))
		}
	}
	if b.ToS != 0 {
		b.to = int64(math.Round(b.ToS * rateHz))
	}
}

func (s *Source) resolve(b *broken) (err error) {
	k, _ := kindNamed(b.Kind)
	q := len(s.layout.shakers)
	forces, channels := s.names[:q], s.names
	switch k.target {
	case oneOrMore:
		if slices.Equal(b.Target, []string{"all"}) {
			b.shakers = count(q)
			return nil
		}
		b.shakers, err = indices(b.Target, forces, "force", " or all")
	case twoForces:
		b.shakers, err = indices(b.Target, forces, "force", "")
	case anyChannel, twoChannels:
		b.outputs, err = indices(b.Target, channels, "channel", "")
	case aResponse:
		b.outputs, err = indices(b.Target, channels[q:], "response", "")
		for i := range b.outputs {
			b.outputs[i] += q
		}
	case aPlace:
		b.at, err = s.place(b.Target[0])
	case aMode:
		b.modes, err = s.layout.structure.modesNear(b.Target[0])
	}
	return err
}

// indices finds names in a list, each once.
func indices(names, list []string, what, orElse string) (found []int, err error) {
	for _, name := range names {
		i := slices.Index(list, name)
		switch {
		case i < 0:
			return nil, fmt.Errorf("no %s has the name %q: choose %s%s", what, name, strings.Join(list, ", "), orElse)
		case slices.Contains(found, i):
			return nil, fmt.Errorf("%s %q stands twice: name it once", what, name)
		}
		found = append(found, i)
	}
	return found, nil
}

// place is where a channel stands, or a point with its axis letter.
func (s *Source) place(name string) (dof, error) {
	if o := slices.Index(s.names, name); o >= 0 {
		if q := len(s.layout.shakers); o >= q {
			return s.layout.sensors[o-q], nil
		}
		return s.layout.shakers[o].at, nil
	}
	_, size := utf8.DecodeLastRuneInString(name)
	at, ok := s.layout.structure.find(name[:len(name)-size], name[len(name)-size:])
	if !ok {
		points := s.layout.structure.points
		return dof{}, fmt.Errorf("there is no place %q: give a channel, or a point from %s to %s with x, y or z, such as %sz",
			name, points[0], points[len(points)-1], points[0])
	}
	return at, nil
}

// modesNear returns the mode nearest to a frequency, or all.
func (s *structure) modesNear(text string) ([]int, error) {
	if text == "all" {
		return count(len(s.modes)), nil
	}
	freqHz, err := strconv.ParseFloat(text, 64)
	if err != nil || !(freqHz > 0) || math.IsInf(freqHz, 1) {
		return nil, errors.New("mode " + strconv.Quote(text) + ": give a frequency in Hz, or all")
	}
	nearest := 0
	off := func(r int) float64 { return math.Abs(s.modes[r].rateRad - 2*math.Pi*freqHz) }
	for r := range s.modes {
		if off(r) < off(nearest) {
			nearest = r
		}
	}
	return []int{nearest}, nil
}

// count is 0 to n-1.
func count(n int) []int {
	list := make([]int, n)
	for i := range list {
		list[i] = i
	}
	return list
}

// channelNames are the names of a rig's channels, forces first.
func channelNames(r *rig.Rig) []string {
	var names []string
	for _, c := range r.Channels() {
		names = append(names, c.Name)
	}
	return names
}

package demo

import (
	"errors"
	"slices"
)

// A turn is where a setting begins.
type turn struct {
	frame   int64
	setting *setting
}

// SetFaults puts faults on the rig in the place of those before, none at all to repair it. One that
// stood in the list before goes on undisturbed. Faults that are set before the first Read act at
// the same frames however the source is read. What is built for them costs a millisecond or two
// each, during which Read waits.
//
// It may be called while another goroutine reads. On an error, which names every fault that the rig
// cannot have, the faults stay as they were.
func (s *Source) SetFaults(faults ...Fault) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	var all []*broken
	var errs []error
	for _, f := range faults {
		same := func(b *broken) bool { return b.String() == f.String() && !slices.Contains(all, b) }
		if i := slices.IndexFunc(s.faults, same); i >= 0 {
			all = append(all, s.faults[i])
			continue
		}
		b, err := s.newBroken(f)
		if err != nil {
			errs = append(errs, err)
			continue
		}
		all = append(all, b)
	}
	if errs != nil {
		return errors.Join(errs...)
	}
	s.faults = all
	s.replan()
	return nil
}

// Frames is the number of frames so far that were read or lost, which is where the next Read goes on. It may be
// called while another goroutine reads.
func (s *Source) Frames() int64 {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.now
}

// replan works out from which frame on which setting holds, from now on.
func (s *Source) replan() {
	frames := []int64{s.now}
	for _, b := range s.faults {
		for _, frame := range []int64{b.from, b.to} {
			if frame > s.now && frame != never {
				frames = append(frames, frame)
			}
		}
	}
	slices.Sort(frames)
	s.turns = s.turns[:0]
	plants := make(map[string]plant)
	for _, frame := range slices.Compact(frames) {
		var standing []*broken
		for _, b := range s.faults {
			if b.from <= frame && frame < b.to {
				standing = append(standing, b)
			}
		}
		set := s.newSetting(standing)
		set.plant = s.plantFor(&set.condition, plants)
		s.turns = append(s.turns, turn{frame, set})
	}
}

// plantFor returns a plant of a condition: the source's own where nothing is broken, and one of
// those built so far where one fits.
func (s *Source) plantFor(c *condition, built map[string]plant) plant {
	key := c.key()
	if key == new(condition).key() {
		return s.sound
	}
	if built[key] == nil {
		built[key] = c.build(s.layout, s.rateHz, s.sub)
	}
	return built[key]
}

// turn goes over to the setting that holds from this frame on, where there is a new one.
func (s *Source) turn() {
	for len(s.turns) > 0 && s.turns[0].frame <= s.now {
		next := s.turns[0].setting
		s.turns = s.turns[1:]
		if next.plant != s.set.plant {
			takeOver(next.plant, s.set.plant, len(s.drives))
		}
		for i, sh := range s.layout.shakers {
			if s.set.link(i).state != joined && next.link(i).state == joined {
				rejoin(next.plant.state(), s.layout.structure, sh.at, i, len(s.drives))
			}
		}
		s.set = next
	}
}

// link is how shaker i hangs on the structure.
func (c *condition) link(i int) link {
	if c.links == nil {
		return link{}
	}
	return c.links[i]
}

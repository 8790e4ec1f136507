package rig

import "github.com/pelletier/go-toml/v2/unstable"

// A file is a rig in the making with the sections it was read from: what several keys say together
// is checked here.
type file struct {
	rig       *Rig
	source    *section
	analysis  *section
	burst     *section
	periodic  *section
	forces    []*section // as rig.Forces
	responses []*section // as rig.Responses
	points    []*section // as rig.Points
}

// check reports what is wrong between keys, each of which may be right by itself.
func (f *file) check(top *section) {
	f.checkNames()
	f.checkChannels()
	f.checkPoints()
	f.rig.rateLine = f.source.lineOf("rate")
	if top.rep.unread {
		return // what contradicts or misses something may be answered in the rest of the file
	}
	for _, key := range []string{"force", "response"} {
		if n := top.table.nodes[key]; n == nil || n.kind == unstable.Array && len(n.items) == 0 {
			top.add(key, "no %s: add a table [[%s]] for each", key, key)
		}
	}
	f.checkAnalysis()
	f.checkBurst()
	f.checkPeriodic()
}

// each calls do with every force, then every response.
func (f *file) each(do func(s *section, c *Channel)) {
	for i, s := range f.forces {
		do(s, &f.rig.Forces[i])
	}
	for i, s := range f.responses {
		do(s, &f.rig.Responses[i])
	}
}

func (f *file) checkNames() {
	seen := map[string]int{}
	f.each(func(s *section, c *Channel) {
		if c.Name == "" {
			return
		}
		if first, ok := seen[c.Name]; ok {
			s.add("name", "the name is taken on line %d: give another", first)
			return
		}
		seen[c.Name] = s.lineOf("name")
	})
}

// checkChannels also fills in how many channels the stream has where the file leaves it open.
func (f *file) checkChannels() {
	channels := f.rig.Source.Channels
	highest, seen := 0, map[int]*section{}
	f.each(func(s *section, c *Channel) {
		if c.Index < 0 {
			return
		}
		highest = max(highest, c.Index+1)
		if first := seen[c.Index]; first != nil {
			s.add("channel", "channel %d is taken by %s on line %d: give another", c.Index+1, first.label, first.lineOf("channel"))
		} else {
			seen[c.Index] = s
		}
		if channels > 0 && c.Index >= channels {
			s.add("channel", "channel %d of %d: choose 1 to %d, or correct [source] channels", c.Index+1, channels, channels)
		}
	})
	if !f.source.has("channels") {
		f.rig.Source.Channels = highest
	}
}

func (f *file) checkAnalysis() {
	a, s := f.rig.Analysis, f.analysis
	if a.MinFrequencyHz >= a.MaxFrequencyHz {
		s.add("min_frequency", "min_frequency %g is not below max_frequency %g: lower it", a.MinFrequencyHz, a.MaxFrequencyHz)
	}
	if a.bounded() {
		if a.Window != "" && a.Window != "rectangular" {
			s.add("window", "window %q with excitation %q: give \"rectangular\"", a.Window, a.Excitation)
		}
		if a.Overlap > 0 {
			s.add("overlap", "overlap %g with excitation %q: give 0", a.Overlap, a.Excitation)
		}
	}
	switch a.Averaging {
	case "exponential":
		s.missing("memory", "give the number of blocks, 2 or more, that exponential averaging remembers")
	case "linear":
		if s.has("memory") {
			s.add("memory", "memory with averaging \"linear\": leave it out, or choose averaging \"exponential\"")
		}
	}
	if a.Excitation == "periodic" && a.Estimator != "" && a.Estimator != "h1" {
		s.add("estimator", "estimator %q with excitation \"periodic\": give \"h1\"", a.Estimator)
	}
	if p, q := len(f.responses), len(f.forces); a.Estimator == "h2" && p > 0 && q > 0 && p != q {
		s.add("estimator", "estimator \"h2\" with %d responses and %d forces: make them equal, or choose \"h1\" or \"hv\"", p, q)
	}
}

// checkOwn reports a section that is lacking with its excitation and says whether it is in use. One
// that stands without its excitation may stay: whoever tries one kind and then another changes one
// word.
func (f *file) checkOwn(s *section, excitation, need string) bool {
	switch own := f.rig.Analysis.Excitation == excitation; {
	case s.blind:
		return false
	case own && s.table == nil:
		f.analysis.add("excitation", "excitation %q without a table %s: add it with %s", excitation, s.label, need)
		return false
	case !own && s.table != nil:
		f.rig.unused = append(f.rig.unused, excitation)
		return false
	default:
		return own
	}
}

func (f *file) checkBurst() {
	b, s := &f.rig.Burst, f.burst
	if !f.checkOwn(s, "burst", "period_s or trigger_force") {
		*b = Burst{}
		return
	}
	switch period, trigger := s.has("period_s"), s.has("trigger_force"); {
	case period && trigger:
		s.add("trigger_force", "period_s and trigger_force: keep one of them")
	case !period && !trigger:
		s.add("", "neither period_s nor trigger_force: give one of them")
	case period:
		b.TriggerLevel = 0
		for _, key := range []string{"trigger_level", "pre_trigger_s"} {
			if s.has(key) {
				s.add(key, "%s with period_s: leave it out, it belongs to trigger_force", key)
			}
		}
	case b.TriggerForce != "":
		f.checkTrigger(b.TriggerForce)
	}
}

func (f *file) checkTrigger(name string) {
	var names []string
	for _, c := range f.rig.Forces {
		if c.Name == name {
			return
		}
		if c.Name != "" {
			names = append(names, c.Name)
		}
	}
	if len(names) > 0 {
		f.burst.add("trigger_force", "no force has the name %s: choose %s", quote(name), either(names))
	}
}

func (f *file) checkPeriodic() {
	if !f.checkOwn(f.periodic, "periodic", "period") {
		f.rig.Periodic = Periodic{}
		return
	}
	f.periodic.missing("period", "give source frames")
}

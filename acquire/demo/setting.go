package demo

import "math"

// A setting is a rig with what is broken on it for a stretch of frames.
type setting struct {
	condition
	plant  plant
	drives []float64 // factor on each drive; nil is sound
	ties   []*tie
	knocks []*broken // in the order of the plant's inputs behind the currents
	chains []chain   // of each output; nil is sound
	twins  [][2]int  // outputs: the first carries the signal of the second
	lost   bool
}

// newSetting returns the setting of faults that stand together, without its plant. Where two
// contradict, the later in the list wins.
func (s *Source) newSetting(standing []*broken) *setting {
	set := &setting{condition: condition{spring: s.spring}}
	for _, b := range standing {
		set.addMechanical(s, b)
		set.addDrive(s, b)
		set.addChain(s, b)
	}
	return set
}

func (set *setting) addMechanical(s *Source, b *broken) {
	linked := func(state linkState) {
		set.links = ensure(set.links, len(s.layout.shakers), link{})
		for _, i := range b.shakers {
			set.links[i] = link{state, b.orUsual()}
		}
	}
	scaled := func(factors *[]float64, by float64) {
		*factors = ensure(*factors, len(s.layout.structure.modes), 1)
		for _, r := range b.modes {
			(*factors)[r] *= by
		}
	}
	switch b.Kind {
	case "detach", "pad-off":
		linked(hanging)
	case "unhook":
		linked(unhooked)
	case "mode-shift":
		scaled(&set.rates, 1+b.orUsual()/100)
	case "mode-damping":
		scaled(&set.dampings, b.orUsual())
	case "tilt":
		set.tilts = ensure(set.tilts, len(s.layout.sensors), 0)
		for _, o := range b.outputs {
			set.tilts[o-len(s.layout.shakers)] = b.orUsual() * math.Pi / 180
		}
	case "knock":
		set.knocked = append(set.knocked, b.at)
		set.knocks = append(set.knocks, b)
	case "skew":
		if early := s.skewSteps(b) % s.sub; early > 0 {
			set.early = ensure(set.early, len(s.outputs), 0)
			for _, o := range b.outputs {
				set.early[o] = early
			}
		}
	case "lost":
		set.lost = true
	}
}

// skewSteps is the skew of a fault in sub steps.
func (s *Source) skewSteps(b *broken) int { return int(math.Round(b.orUsual() * float64(s.sub))) }

func (set *setting) addDrive(s *Source, b *broken) {
	factor := 1.0
	switch b.Kind {
	case "drive-off":
		factor = 0
	case "level":
		factor = math.Pow(10, b.orUsual()/20)
	case "tied", "tied-band":
		for i := range b.ties {
			set.ties = append(set.ties, &b.ties[i])
		}
		return
	default:
		return
	}
	set.drives = ensure(set.drives, len(s.layout.shakers), 1)
	for _, i := range b.shakers {
		set.drives[i] *= factor
	}
}

func (set *setting) addChain(s *Source, b *broken) {
	if b.Kind == "twin" {
		set.twins = append(set.twins, [2]int{b.outputs[0], b.outputs[1]})
		return
	}
	for i, o := range b.outputs {
		set.chains = ensure(set.chains, len(s.outputs), soundChain)
		switch c := &set.chains[o]; b.Kind {
		case "gain", "overrange":
			c.gain *= b.orUsual()
		case "reverse":
			c.gain = -c.gain
		case "cut":
			c.cut = true
		case "dead":
			c.dead, c.constant = true, b.Amount
		case "skew":
			c.late = s.skewSteps(b) / s.sub
		case "loose":
			c.flutters = append(c.flutters, b.flutters[i])
		}
	}
}

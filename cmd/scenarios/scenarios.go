package main

// tiedWithin is in how many hops drives that repeat each other must be found. It shows in an average of blocks only. Our own
// choice: twice as many as a force alone takes to be known, and a look or two.
const tiedWithin = 20

// Lighter blows than demo's, which drives these light rigs to their limit, N s: a knuckle's, and one that still stands out
// of what a rectangular window leaks. Our own choice.
const lightKnockNS, knockNS = 0.05, 0.2

// long is base with faults that stand for longer.
var long = varied(base.name, func(s *setting) { s.lasts = [2]int{22, 28} })

// startBlocks is how many blocks a run with a fault from the start has; reciprocity is judged from 16 on, at every eighth
// more.
const startBlocks = 48

func one(kind string, o on) []fault { return []fault{{kind: kind, on: o}} }

// come is a fault that comes and goes, in the base setting.
func come(name, kind string, o on, change ...func(s *scenario)) scenario {
	s := scenario{name: name, setting: base, aim: named, faults: one(kind, o)}
	for _, c := range change {
		c(&s)
	}
	return s
}

func several(s *scenario) { s.shakers = 2 }

// stays is a fault from the first block on.
func stays(name, kind string, o on, a aim) scenario {
	return scenario{name: name + " from the start", setting: base, aim: a, shakers: 2, faults: one(kind, o), start: true}
}

// inTurn are the faults that each other setting is tried with, one a seed.
var inTurn = []scenario{
	come("detach", "detach", aForce),
	come("drive-off one", "drive-off", aForce, several),
	come("drive-off all", "drive-off", everyForce),
	come("loose response", "loose", aResponse),
	come("gain of a response", "gain", aResponse),
	come("mode-shift", "mode-shift", aMode),
	come("level of one", "level", aForce, func(s *scenario) { s.averaged = true }),
	come("knock", "knock", aPlace, func(s *scenario) { s.brief, s.faults[0].amount = true, knockNS }),
	come("lost frames", "lost", nothing),
}

// scenarios is the table of what is tried.
func scenarios() []scenario {
	list := []scenario{
		{name: "healthy", setting: base, aim: healthy, blocks: 100, share: 5},

		come("detach", "detach", aForce),
		come("unhook", "unhook", aForce),
		come("pad-off", "pad-off", aForce),
		come("drive-off one", "drive-off", aForce, several),
		come("drive-off all", "drive-off", everyForce),
		come("loose response", "loose", aResponse),
		come("loose cell", "loose", aForce),
		come("cut response", "cut", aResponse),
		come("cut cell", "cut", aForce),
		come("dead response", "dead", aResponse),
		come("dead cell", "dead", aForce),
		come("gain of a response", "gain", aResponse),
		come("gain of a cell", "gain", aForce),
		come("reversed response", "reverse", aResponse),
		come("reversed cell", "reverse", aForce),
		come("skew of a response", "skew", aResponse),
		come("tilted response", "tilt", aResponse),
		come("twin responses", "twin", twoResponses),
		come("mode-shift", "mode-shift", aMode),
		come("mode-damping", "mode-damping", aMode),
		come("overrange", "overrange", aResponse),
		come("level of one", "level", aForce, func(s *scenario) { s.averaged = true }),
		come("level of all", "level", everyForce, func(s *scenario) { s.averaged = true }),
		come("heavy knock", "knock", aPlace, func(s *scenario) { s.brief = true }),
		come("light knock", "knock", aPlace, func(s *scenario) { s.brief, s.faults[0].amount = true, lightKnockNS }),
		come("lost frames", "lost", nothing),
		come("tied drives", "tied", someForces, func(s *scenario) {
			s.setting, s.shakers, s.averaged, s.within = long, 2, true, tiedWithin
		}),
		come("tied band", "tied-band", someForces, func(s *scenario) {
			s.setting, s.shakers, s.averaged, s.within = long, 2, true, tiedWithin
		}),

		stays("gain", "gain", aDrivingPoint, reciprocal),
		stays("reversed response", "reverse", aDrivingPoint, reciprocal),
		stays("reversed cell", "reverse", aForce, reciprocal),
		stays("skew", "skew", aDrivingPoint, reciprocal),
		stays("tilt", "tilt", aDrivingPoint, reciprocal),
		stays("dead response", "dead", aResponse, named),
		stays("dead cell", "dead", aForce, named),
		stays("twin responses", "twin", twoResponses, named),

		two("detach, then loose", fault{kind: "detach", on: aForce}, fault{kind: "loose", on: aResponse}),
		two("loose, then cut", fault{kind: "loose", on: aResponse}, fault{kind: "cut", on: otherResponse}),
		two("gain, then drive-off", fault{kind: "gain", on: aResponse}, fault{kind: "drive-off", on: aForce}),
		two("drive-off, then detach", fault{kind: "drive-off", on: aForce}, fault{kind: "detach", on: anotherForce}),
		two("mode-shift, then reversed", fault{kind: "mode-shift", on: aMode}, fault{kind: "reverse", on: aResponse}),
	}
	for _, set := range settings {
		list = append(list,
			scenario{name: "healthy", setting: set, aim: healthy, blocks: 40, share: 0.5},
			scenario{name: "faults in turn", setting: set, aim: named, turns: inTurn})
		if set.excitation != "" { // an emergency stop in the silence behind a burst, or within a period
			list = append(list, scenario{name: "drive-off all", setting: set, aim: named, faults: one("drive-off", everyForce), share: 0.25})
		}
	}
	return list
}

// two are two faults, the second some blocks after the first. Nothing is promised but that no block with them is averaged.
func two(name string, first, second fault) scenario {
	second.later = [2]int{6, 10}
	s := scenario{name: name, setting: base, aim: reported, shakers: 2, faults: []fault{first, second}}
	s.setting.lasts = [2]int{20, 26}
	return s
}

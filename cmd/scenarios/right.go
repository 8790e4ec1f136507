package main

import (
	"math"
	"slices"

	"shakerwatch/estimate/watch"
)

// A who says whom an event must accuse.
type who int

const (
	anyone      who = iota // whoever follows worst, which is a matter of the structure
	theTargets             // the fault's targets and nobody else
	withTargets            // the targets, among others
	allForces              // every force of the rig
	thePoint               // a force and its driving-point response, one of which is the target
	aPair                  // two forces, one of which has the target at its driving point
	aFactorPair            // such a pair that physics makes disagree by a factor, or by little else
)

// A shakers narrows an answer to rigs of one shaker or of several.
type shakers int

const (
	anyShakers shakers = iota
	oneShaker
	severalShakers
)

// An answer is what the watch may rightly say about a fault.
type answer struct {
	kind  watch.Kind
	who   who
	on    shakers
	cause watch.Cause // empty is any
	why   string

	// share is how much of the fault's own band an event must name, so that what the structure does to the forces
	// is not taken for it; 0 is any.
	share float64
}

// On what a fault acts, where that matters for what is right.
const (
	onForce    = "force"
	onResponse = "response"
	onAll      = "all" // forces
	fromStart  = " from the start"
)

// A right is a row of the table of right answers.
type right struct {
	fault   string // kind of demo.Fault
	on      string // onForce, onResponse, onAll or empty; with fromStart where nothing was seen without the fault
	answers []answer
}

// Reasons that several rows share. The kinds are those of the project's formats, section Events.
const (
	whyCollapsed = "the force collapsed by 20 dB or more while others run on, or fell far and only follows them"
	whyShades    = "the hanging mass still makes a force, but not in the structure; near 20 dB either name is right"
	whyAlone     = "with one shaker, a force that collapses is the drive that ended"
	whyNobody    = "no kind accuses the chain of a cell; what is measured there no longer is what the structure follows"
	whyChain     = "one response, over a broad band, no longer follows the forces while the others do"
	whyLevel     = "less than 20 dB, and the structure still follows"
)

// stingerOff is what a stinger or a pad that came off may be called.
func stingerOff() []answer {
	return []answer{
		{watch.ForceLost, theTargets, severalShakers, "", whyCollapsed, 0},
		{watch.ForceNotReaching, theTargets, anyShakers, "", whyShades, 0},
		{watch.NoDrive, allForces, oneShaker, "", whyAlone, 0},
	}
}

// cellChain is what may be said of a cell whose chain is at fault while its force is as before.
func cellChain() []answer {
	return []answer{
		{watch.ForceNotReaching, theTargets, anyShakers, "", whyNobody, 0},
		{watch.StructureChanged, anyone, anyShakers, "", whyNobody, 0},
	}
}

func sensorChain() []answer {
	return []answer{{watch.ResponseSuspect, theTargets, anyShakers, "", whyChain, 0}}
}

func structureChanged() []answer {
	return []answer{{watch.StructureChanged, anyone, anyShakers, "", "responses change, the forces do not explain it, no single channel does", 0}}
}

// rights is the table: which kinds count as right for which fault, and why.
var rights = []right{
	{"detach", onForce, stingerOff()},
	{"unhook", onForce, stingerOff()},
	{"pad-off", onForce, stingerOff()},
	{"drive-off", onForce, []answer{ // of a force that falls far: see oneThatFalls
		{watch.ForceLost, theTargets, severalShakers, "", whyCollapsed, 0},
		{watch.NoDrive, allForces, oneShaker, "", whyAlone, 0},
	}},
	{"drive-off", onAll, []answer{{watch.NoDrive, allForces, anyShakers, "", "every force fell by 20 dB or more, or to within 10 dB of its noise", 0}}},
	{"loose", onResponse, sensorChain()},
	{"loose", onForce, cellChain()},
	{"cut", onResponse, append(sensorChain(),
		answer{watch.DeadChannel, theTargets, anyShakers, "", "a broken cable may leave a constant", 0})},
	{"cut", onForce, []answer{
		{watch.ForceLost, theTargets, severalShakers, "", "what is measured collapsed; the text names the cell's cable", 0},
		{watch.NoDrive, allForces, oneShaker, "", whyAlone, 0},
		{watch.ForceNotReaching, theTargets, anyShakers, "", "the structure does not follow the noise that is left", 0},
		{watch.DeadChannel, theTargets, anyShakers, "", "a broken cable may leave a constant", 0},
	}},
	{"dead", onResponse, []answer{{watch.DeadChannel, theTargets, anyShakers, "", "a channel in use is constant", 0}}},
	{"dead", onForce, []answer{{watch.DeadChannel, theTargets, anyShakers, "", "a channel in use is constant", 0}}},
	{"gain", onResponse, sensorChain()},
	{"gain", onForce, cellChain()},
	{"reverse", onResponse, sensorChain()},
	{"reverse", onForce, cellChain()},
	{"skew", onResponse, sensorChain()},
	{"tilt", onResponse, append(sensorChain(),
		answer{watch.StructureChanged, theTargets, anyShakers, "", "turned, a sensor gains most where the next axis moves, which may be part of the band; that one is named all the same", 0})},
	{"twin", onResponse, []answer{{watch.TwinChannels, theTargets, anyShakers, "", "two channels in use carry the same signal", 0}}},
	{"overrange", onResponse, []answer{{watch.Overrange, withTargets, anyShakers, "", "a channel in use reached its limit", 0}}},
	{"mode-shift", "", structureChanged()},
	{"mode-damping", "", structureChanged()},
	{"level", onForce, []answer{{watch.LevelChanged, withTargets, anyShakers, "", whyLevel + "; the structure takes other forces along", 0}}},
	{"level", onAll, []answer{{watch.LevelChanged, allForces, anyShakers, "", whyLevel, 0}}},
	{"tied", onForce, []answer{{watch.ForcesCorrelated, withTargets, anyShakers, "", "forces depend on each other beyond chance, in most of the band", 0.5}}},
	{"tied-band", onForce, []answer{{watch.ForcesCorrelated, withTargets, anyShakers, "", "forces depend on each other beyond chance in the band that is tied", 0.5}}},
	{"knock", "", []answer{
		{watch.Disturbance, anyone, anyShakers, "", "energy that no shaker put in, over before a cause could be named", 0},
		{watch.Overrange, anyone, anyShakers, "", "a blow may drive a channel to its limit; then its blocks are not looked at", 0},
	}},
	{"lost", "", []answer{{watch.Gap, anyone, anyShakers, "", "frames were lost", 0}}},

	{"gain", onResponse + fromStart, []answer{{watch.ReciprocityOff, aPair, anyShakers, watch.CauseGain, "a driving-point pair disagrees by a factor", 0}}},
	{"reverse", onResponse + fromStart, []answer{
		{watch.PolaritySuspect, thePoint, anyShakers, "", "power flows out of the structure", 0},
		{watch.ReciprocityOff, aPair, severalShakers, watch.CausePolarity, "a driving-point pair disagrees by its sign", 0},
	}},
	{"reverse", onForce + fromStart, []answer{
		{watch.PolaritySuspect, thePoint, anyShakers, "", "power flows out of the structure", 0},
		{watch.ReciprocityOff, aPair, severalShakers, watch.CausePolarity, "a driving-point pair disagrees by its sign", 0},
	}},
	{"skew", onResponse + fromStart, []answer{
		{watch.ReciprocityOff, aPair, anyShakers, watch.CauseSkew, "a driving-point pair disagrees by a delay", 0},
		{watch.PolaritySuspect, thePoint, anyShakers, "", "a large skew looks like a reversed sensor", 0},
	}},
	{"tilt", onResponse + fromStart, []answer{
		{watch.ReciprocityOff, aPair, anyShakers, watch.CauseLocal, "axes not aligned", 0},
		{watch.ReciprocityOff, aFactorPair, anyShakers, watch.CauseGain, "where the next axis moves alike, or not at all, a turned sensor is one of another gain", 0},
	}},
	{"dead", onResponse + fromStart, []answer{{watch.DeadChannel, theTargets, anyShakers, "", "a channel in use is constant", 0}}},
	{"dead", onForce + fromStart, []answer{{watch.DeadChannel, theTargets, anyShakers, "", "a channel in use is constant", 0}}},
	{"twin", onResponse + fromStart, []answer{{watch.TwinChannels, theTargets, anyShakers, "", "two channels in use carry the same signal", 0}}},
}

// answersTo are the right answers to a fault on a rig of q forces. There is a row for each fault of the scenarios; it
// panics on another.
func answersTo(fault, on string, q int) (list []answer) {
	for _, r := range rights {
		if r.fault != fault || r.on != on {
			continue
		}
		for _, a := range r.answers {
			if a.on == anyShakers || (a.on == oneShaker) == (q == 1) {
				list = append(list, a)
			}
		}
		return list
	}
	panic("scenarios: no right answers to " + fault + " on " + on)
}

// accuses tells whether an event accuses whom an answer wants.
func (f *planned) accuses(e *watch.Event, a answer, forces []string) bool {
	among := func(list []string) bool {
		return !slices.ContainsFunc(list, func(name string) bool { return !slices.Contains(e.Channels, name) })
	}
	switch a.who {
	case anyone:
		return true
	case theTargets:
		return len(e.Channels) == len(f.Target) && among(f.Target)
	case withTargets:
		return among(f.Target)
	case allForces:
		return len(e.Channels) == len(forces) && among(forces)
	case thePoint:
		return len(e.Channels) == 2 && among([]string{f.pointForce, f.pointResponse})
	case aFactorPair:
		return len(e.Channels) == 2 && among([]string{f.pointForce}) &&
			slices.ContainsFunc(f.factors, func(name string) bool { return slices.Contains(e.Channels, name) })
	default:
		return len(e.Channels) == 2 && among([]string{f.pointForce})
	}
}

// saidRight tells whether an event is a right answer to a fault.
func (f *planned) saidRight(e *watch.Event, forces []string) bool {
	for _, a := range f.answers {
		if e.Kind == a.kind && (a.cause == "" || e.Cause == a.cause) && f.accuses(e, a, forces) &&
			covered(e.BandsHz, f.bandHz) >= a.share {
			return true
		}
	}
	return false
}

// covered is the share of a band that lies in some bands, which do not overlap.
func covered(bandsHz [][2]float64, of [2]float64) float64 {
	var sum float64
	for _, b := range bandsHz {
		sum += max(0, min(b[1], of[1])-max(b[0], of[0]))
	}
	return sum / max(of[1]-of[0], math.SmallestNonzeroFloat64)
}

package demo

// A shaker is electrodynamic and driven with a current: the force on its armature is proportional
// to the current whatever the armature does. The armature hangs in flexures on a heavy body that
// stands still, and pushes the structure through a stinger. The load cell sits between stinger and
// structure, so it measures the force that enters the structure; what the armature's inertia takes
// is missing there, most of all where the structure moves easily.
type shaker struct {
	forceNPerA    float64 // on the armature
	armatureKg    float64
	flexureNPerM  float64
	flexureNSPerM float64 // damping
	stingerNPerM  float64 // axial
	stingerNSPerM float64 // axial damping
	currentRMSA   float64 // default drive
}

// defaultShaker has an armature that resonates at 36 Hz in its flexures and, against a blocked load
// cell, at 2.0 kHz on its stinger, a steel rod 8 mm thick and 80 mm long. All figures are our own
// choice within what such shakers have.
var defaultShaker = shaker{
	forceNPerA:    25,
	armatureKg:    0.8,
	flexureNPerM:  40e3,
	flexureNSPerM: 40,
	stingerNPerM:  130e6,
	stingerNSPerM: 400,
	currentRMSA:   1.2,
}

package demo

// A shaker is electrodynamic. The armature hangs in flexures on a heavy body that stands still, and
// pushes the structure through a stinger. The load cell sits between stinger and structure, so it
// measures the force that enters the structure; what the armature's inertia takes is missing there,
// most of all where the structure moves easily.
//
// Driven with a current the force on the armature is proportional to the current whatever the
// armature does. Driven with a voltage u the coil's resistance R and the voltage that its motion v
// induces leave the current (u - Bl v)/R, hence the force Bl/R u - Bl²/R v: the induced voltage
// brakes the armature, the more the easier the structure moves (Ewins, Modal Testing, 2nd ed.,
// 2000, from memory). The coil's inductance, which matters at some hundred hertz and above, is left
// out.
type shaker struct {
	forceNPerA    float64 // Bl, on the armature
	coilOhm       float64 // R of a shaker driven with a voltage; 0 is driven with a current
	armatureKg    float64
	flexureNPerM  float64
	flexureNSPerM float64 // damping
	stingerNPerM  float64 // axial
	stingerNSPerM float64 // axial damping
	driveRMS      float64 // default drive, A or V
}

// gain is the force on an armature at rest for a unit drive, N per A or N per V.
func (sh *shaker) gain() float64 {
	if sh.coilOhm > 0 {
		return sh.forceNPerA / sh.coilOhm
	}
	return sh.forceNPerA
}

// resistance is what brakes an armature, N s/m.
func (sh *shaker) resistance() float64 {
	if sh.coilOhm > 0 {
		return sh.flexureNSPerM + sh.forceNPerA*sh.forceNPerA/sh.coilOhm
	}
	return sh.flexureNSPerM
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
	driveRMS:      1.2,
}

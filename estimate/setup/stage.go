package setup

import "fmt"

// A Stage is one of the measurements of a setup check.
type Stage int

// The stages, in the order in which a person is led through them.
const (
	Muted Stage = iota // amplifiers muted
	Idle               // amplifiers on at zero drive
	Low                // shakers on low
)

const stages = 3

// Stages lists the stages in order. The caller owns the slice.
func Stages() []Stage { return []Stage{Muted, Idle, Low} }

var stageWords = [stages]struct{ code, name, instruction string }{
	Muted: {"muted", "amplifiers muted",
		"Mute every amplifier and set its gain to the lowest; leave the sensors and their conditioners on. Keep clear of the " +
			"shakers and of what hangs, and let nobody touch the rig until this stage is over. Local rules and qualified people decide."},
	Idle: {"idle", "amplifiers on at zero drive",
		"Set the drive to zero, then switch the amplifiers on, one after the other, at their lowest gain first: a shaker can jump when " +
			"its amplifier comes on. Keep clear of the shakers and of what hangs, with an emergency stop in reach. Local rules and qualified people decide."},
	Low: {"low", "shakers on low",
		"Start the drive at its lowest level and raise it slowly until the forces can be seen, well below the level of the run. Keep clear of the " +
			"shakers and of what hangs, with an emergency stop in reach; this program switches nothing off. Local rules and qualified people decide."},
}

func (s Stage) valid() bool { return s >= 0 && s < stages }

// String is the stage's code: "muted", "idle" or "low".
func (s Stage) String() string {
	if !s.valid() {
		return fmt.Sprintf("stage %d", int(s))
	}
	return stageWords[s].code
}

// MarshalText writes the code.
func (s Stage) MarshalText() ([]byte, error) { return []byte(s.String()), nil }

// Name says in a few words what is on during the stage. It panics when there is no such stage.
func (s Stage) Name() string { return stageWords[s].name }

// Instruction is what a person is told before the stage, what to do and what to beware of. It panics
// when there is no such stage.
func (s Stage) Instruction() string { return stageWords[s].instruction }

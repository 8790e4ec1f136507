package watch

import "fmt"

// A kind is all there is to say about one kind of event, but for how it is found.
type kind struct {
	name   Kind
	source source
	fault  bool // the verdict is stop-and-look while it stands
	holds  bool // nothing is averaged while it stands, with on_fault = "hold"

	// hold and away are the two lengths: how many findings in a row raise it, and after how many
	// blocks (or looks at the average) in a row without it is cleared. 0 for away: it is raised only.
	// How many may depend on how many blocks overlap.
	hold func(overlap int) int
	away int

	// lasts: a knock may look like it, so it is raised only when more blocks in a row than overlap were abnormal. rings:
	// the ringing after a knock may too, so it is not raised while it dies away.
	lasts, rings bool

	explainedBy []Kind // it stays silent while one of these stands or is found in the same block

	raised, cleared, standing func(s said) string
}

// Lengths that several kinds share.
const (
	// awayFault: four normal blocks at 50 % overlap are two and a half independent ones, long enough that someone
	// who is still busy at the sensor does not make it flicker.
	awayFault = 4

	// awayLooks: the average changes by an eighth only from one look to the next.
	awayLooks = 2
)

// once is for what is seen for certain.
func once(int) int { return 1 }

// twice: one block can be half affected, and looks like another kind then; of two that say the same, one is
// affected as a whole. The second look at an average is there to let bands settle.
func twice(int) int { return 2 }

// oneMore than the blocks that one moment can be in, as half-affected blocks of any fault look like it; and three at least,
// since the ringing after a knock at the end of a block is in the next one.
func oneMore(overlap int) int { return max(3, overlap+1) }

// forceFaults explain what follows from a force that does not arrive.
var forceFaults = []Kind{NoDrive, ForceLost, ForceNotReaching}

// kinds is the table. Where several are found at once, they are raised in this order.
var kinds = []kind{
	{
		name: Overrange, source: everyBlock, hold: once, away: 1,
		raised: func(s said) string {
			return fmt.Sprintf("%s reached the limit between %.3f s and %.3f s. Lower its gain or the drive; blocks with it are not averaged.", s.names, s.e.StartS, s.e.EndS)
		},
		cleared: func(s said) string {
			return fmt.Sprintf("%s stayed below the limit from %.3f s on.", s.names, s.e.StartS)
		},
		standing: func(s said) string {
			return s.names + " reached the limit: lower its gain or the drive; averaging waits"
		},
	},
	{
		name: Gap, source: everyBlock, hold: once, away: 1,
		raised: func(s said) string {
			return fmt.Sprintf("%d frames were lost from %.3f s on. Blocks that touch them are not averaged; if it happens again, look at the interface's cable and at what else the computer does.", s.e.Lost.Frames, s.e.Lost.StartS)
		},
		cleared: func(s said) string {
			return fmt.Sprintf("No frames were lost from %.3f s on.", s.e.StartS)
		},
		standing: func(said) string {
			return "frames were lost: averaging waits for the first block without a gap"
		},
	},
	{
		name: DeadChannel, source: transformed, fault: true, hold: twice, away: awayFault,
		raised: func(s said) string {
			return fmt.Sprintf("%s: the channel is constant %s. Check its cable, connector and sensor supply at %s, and the channel number.", s.names, s.since(), s.points)
		},
		cleared:  func(s said) string { return fmt.Sprintf("%s: the channel is alive again.", s.names) },
		standing: func(s said) string { return s.names + ": the channel is constant; check cable and sensor supply" },
	},
	{
		name: TwinChannels, source: transformed, fault: true, hold: twice, away: awayFault,
		explainedBy: []Kind{DeadChannel},
		raised: func(s said) string {
			return fmt.Sprintf("%s carry the same signal %s. Look for one cable on two inputs, and at the channel numbers.", s.names, s.since())
		},
		cleared:  func(s said) string { return fmt.Sprintf("%s carry signals of their own again.", s.names) },
		standing: func(s said) string { return s.names + " carry the same signal; look for one cable on two inputs" },
	},
	{
		name: NoDrive, source: armed, fault: true, holds: true, hold: twice, away: awayFault,
		explainedBy: []Kind{DeadChannel},
		raised: func(s said) string {
			return fmt.Sprintf("No shaker drives the structure %s. Find out why the drive stopped or tripped before anyone starts it again; averaging waits%s.", s.since(), s.detail)
		},
		cleared:  func(s said) string { return "The shakers drive the structure again; averaging goes on." },
		standing: func(s said) string { return "no shaker drives the structure; averaging waits" },
	},
	{
		name: ForceLost, source: armed, fault: true, holds: true, hold: twice, away: awayFault,
		explainedBy: []Kind{NoDrive, DeadChannel},
		raised: func(s said) string {
			return fmt.Sprintf("%s: the force is lost %s%s. Stop the shaker, then check the stinger at %s, the amplifier and the cell's cable; averaging waits.", s.names, s.since(), s.detail, s.points)
		},
		cleared:  func(s said) string { return fmt.Sprintf("%s: the force is back; averaging goes on.", s.names) },
		standing: func(s said) string { return s.names + ": the force is lost; averaging waits" },
	},
	{
		name: ForceNotReaching, source: armed, fault: true, holds: true, hold: twice, lasts: true, away: awayFault,
		explainedBy: []Kind{NoDrive, DeadChannel},
		raised: func(s said) string {
			return fmt.Sprintf("%s: the structure no longer follows this force %s. Stop the shaker, then check the load cell's mount at %s; averaging waits%s.", s.names, s.since(), s.points, s.detail)
		},
		cleared: func(s said) string {
			return fmt.Sprintf("%s: the structure follows this force again; averaging goes on.", s.names)
		},
		standing: func(s said) string { return s.names + ": the structure does not follow this force; averaging waits" },
	},
	{
		name: ResponseSuspect, source: armed, fault: true, holds: true, hold: twice, lasts: true, away: awayFault,
		explainedBy: []Kind{DeadChannel, TwinChannels, NoDrive, StructureChanged},
		raised: func(s said) string {
			return fmt.Sprintf("%s: this sensor no longer follows the forces while the others do, %s. Check how it is mounted at %s, its cable and its gain; averaging waits.", s.names, s.since(), s.points)
		},
		cleared: func(s said) string {
			return fmt.Sprintf("%s: this sensor follows the forces again; averaging goes on.", s.names)
		},
		standing: func(s said) string { return s.names + ": this sensor does not follow the forces; averaging waits" },
	},
	{
		name: StructureChanged, source: armed, fault: true, holds: true, hold: oneMore, lasts: true, rings: true, away: awayFault,
		explainedBy: append([]Kind{DeadChannel, TwinChannels}, forceFaults...),
		raised: func(s said) string {
			return fmt.Sprintf("The structure changed %s, seen at %s, %s. Look for a joint, a boundary or a mass that changed; averaging waits until it is as before.", s.since(), s.names, s.bands())
		},
		cleared:  func(s said) string { return "The structure is as it was before; averaging goes on." },
		standing: func(s said) string { return fmt.Sprintf("the structure changed (%s); averaging waits", s.bands()) },
	},
	{
		name: LevelChanged, source: armed, hold: twice,
		explainedBy: append([]Kind{DeadChannel, StructureChanged}, forceFaults...),
		raised: func(s said) string {
			return fmt.Sprintf("%s: the level changed by %+.1f dB at %.1f s and the structure still follows. %s", s.names, s.value, s.sinceS, levelAdvice(s.value))
		},
		standing: func(s said) string {
			if !startOver(s.value) {
				return ""
			}
			return fmt.Sprintf("%s changed level by %+.1f dB at %.1f s: start the average over", s.names, s.value, s.sinceS)
		},
	},
	{
		name: Disturbance, source: armed, hold: once,
		raised: func(s said) string {
			if s.detail == faltered {
				return fmt.Sprintf("%s: the drive faltered at %.1f s. If it happens again, look at amplifier, drive signal and plugs; the blocks with it are not averaged.", s.names, s.sinceS)
			}
			return fmt.Sprintf("Something other than the shakers moved the structure at %.1f s, seen at %s. Keep people and cranes off it while it is measured; the blocks with it are not averaged.", s.sinceS, s.names)
		},
	},
	{
		name: ForceLost + atStart, source: average, fault: true, holds: true, hold: twice, away: awayLooks,
		explainedBy: []Kind{NoDrive + atStart, DeadChannel, TwinChannels, ForceLost},
		raised: func(s said) string {
			return fmt.Sprintf("%s: this force has only followed the others from the start. Stop the shaker, check the stinger at %s, the amplifier and its drive signal, then start the average over; averaging waits.", s.names, s.points)
		},
		cleared:  func(s said) string { return fmt.Sprintf("%s: the force is there.", s.names) },
		standing: func(s said) string { return s.names + ": this force only follows the others; averaging waits" },
	},
	{
		name: NoDrive + atStart, source: average, fault: true, holds: true, hold: twice, away: awayLooks,
		explainedBy: []Kind{NoDrive},
		raised: func(s said) string {
			return "No response has followed any force from the start. See whether the shakers are driven at all; averaging waits until the level rises."
		},
		cleared:  func(s said) string { return "The shakers drive the structure; averaging goes on." },
		standing: func(s said) string { return "no response follows any force; averaging waits" },
	},
	{
		name: ForceNotReaching + atStart, source: average, fault: true, holds: true, hold: twice, away: awayLooks,
		explainedBy: []Kind{NoDrive + atStart, ForceLost + atStart, NoDrive, ForceLost, ForceNotReaching, DeadChannel},
		raised: func(s said) string {
			return fmt.Sprintf("%s: the structure has not followed this force at its driving point from the start. Stop the shaker, check the load cell's mount at %s and the channel numbers, then start the average over; averaging waits.", s.names, s.points)
		},
		cleared:  func(s said) string { return fmt.Sprintf("%s: the structure follows this force.", s.names) },
		standing: func(s said) string { return s.names + ": the structure does not follow this force; averaging waits" },
	},
	{
		name: PolaritySuspect, source: average, fault: true, hold: once, away: awayLooks,
		explainedBy: []Kind{NoDrive + atStart, ForceLost + atStart, ForceNotReaching + atStart, DeadChannel, TwinChannels},
		raised: func(s said) string {
			return fmt.Sprintf("%s: at %s power flows out of the structure over most of the band. Look which way cell and sensor face and at the signs of both axes and sensitivities; a large skew in time looks alike.", s.names, s.points)
		},
		cleared: func(s said) string {
			return fmt.Sprintf("%s: power flows into the structure at %s.", s.names, s.points)
		},
		standing: func(s said) string {
			return s.names + ": power flows out of the structure; look for a reversed sensor or cell"
		},
	},
	{
		name: ReciprocityOff, source: average, fault: true, hold: twice, away: awayLooks,
		explainedBy: []Kind{NoDrive + atStart, ForceLost + atStart, ForceNotReaching + atStart, DeadChannel, TwinChannels, PolaritySuspect},
		raised:      func(s said) string { return fmt.Sprintf("%s: reciprocity is off, %s.", s.names, s.detail) },
		cleared:     func(s said) string { return fmt.Sprintf("%s: reciprocity holds.", s.names) },
		standing:    func(s said) string { return fmt.Sprintf("%s: reciprocity is off, %s", s.names, s.detail) },
	},
	{
		name: ForcesCorrelated, source: average, hold: twice, away: awayLooks,
		explainedBy: []Kind{NoDrive + atStart, ForceLost + atStart, DeadChannel, TwinChannels},
		raised: func(s said) string {
			if s.cause == CauseMains {
				return fmt.Sprintf("%s depend on each other at %s, a multiple of the mains frequency. It is most likely hum: look for ground loops, but leave every protective earth on.", s.names, s.bands())
			}
			return fmt.Sprintf("%s depend on each other, up to a coherence of %.2f, at %s. If the drive signals are the same there, make them independent; if it is a resonance, move a shaker, drive it harder there or average for longer.", s.names, s.value, s.bands())
		},
		cleared: func(s said) string {
			return fmt.Sprintf("%s: the bands in which they depend on each other changed or are gone (%s).", s.names, s.bands())
		},
		standing: func(s said) string { return fmt.Sprintf("%s depend on each other at %s", s.names, s.bands()) },
	},
	{
		name: ForcesCorrelated + ofLate, source: recent, hold: once, away: awayRecent,
		explainedBy: append([]Kind{DeadChannel, TwinChannels, ForceLost + atStart}, forceFaults...),
		raised: func(s said) string {
			return fmt.Sprintf("%s began to depend on each other at %s, about %s. If the drive signals are the same now, make them independent and start the average over.", s.names, s.bands(), s.since())
		},
		cleared: func(s said) string {
			return fmt.Sprintf("%s do not depend on each other any more at %s.", s.names, s.bands())
		},
		standing: func(s said) string { return fmt.Sprintf("%s depend on each other at %s of late", s.names, s.bands()) },
	},
	{
		name: LowSignal, source: average, hold: twice, away: awayLooks,
		explainedBy: []Kind{NoDrive + atStart, DeadChannel},
		raised: func(s said) string {
			return fmt.Sprintf("%s: the signal is within %d dB of its noise at %s. Drive harder there, or use a more sensitive transducer or more gain.", s.names, lowSignalDB, s.bands())
		},
		cleared: func(s said) string {
			return fmt.Sprintf("%s: the signal stands clear of its noise, or does so elsewhere (%s).", s.names, s.bands())
		},
		standing: func(s said) string {
			return fmt.Sprintf("%s: within %d dB of the noise at %s", s.names, lowSignalDB, s.bands())
		},
	},
}

// atStart marks the twin in the table of a kind that is found in the average rather than in a block: a
// fault that was there from the first block on. Events carry the name without it.
const atStart Kind = " at the start"

// kindOf is the entry of a kind. The table has every kind that a finding can name.
func kindOf(name Kind) *kind {
	for i := range kinds {
		if kinds[i].name == name {
			return &kinds[i]
		}
	}
	panic("watch: no kind is called " + string(name))
}

// levelSpoils is the change of level, dB, from which blocks before and after it do not belong in one average:
// at 20 dB a 90 % region held the truth in 67 % of cases only.
const levelSpoils = 6

func startOver(db float64) bool { return db >= levelSpoils || db <= -levelSpoils }

func levelAdvice(db float64) string {
	if startOver(db) {
		return "Look at the gain and the drive, then start the average over."
	}
	return "Averaging goes on at the new level; if nobody meant it, look at the gain and the drive."
}

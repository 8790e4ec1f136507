package watch

import (
	"math"
	"slices"
)

const (
	// fellDB is from where on a force without a driving point is suspected to follow the others only.
	fellDB = -3

	// roseDB is the rise above which a force that only answers says nothing of its drive: a blow made the structure move.
	// stillPassive is the passive share above which a force that only answered still does.
	roseDB, stillPassive = 3, 0.6
)

// passives finds the forces that only answer what the structure does at their driving points, however strong they are:
// those of heavy armatures on a light structure hardly fall when their drive ends.
func (d *diagnosis) passives() {
	for i, driven := range d.driven {
		limit := passiveShare
		if d.passive>>i&1 != 0 {
			limit = stillPassive
		}
		d.passive &^= 1 << i
		if driven && d.layout.q > 1 && d.block.levels.db[i] < roseDB && d.block.passiveShareOf(i) > limit {
			d.passive |= 1 << i
		}
	}
}

// levels explains a block whose responses follow as they should.
func (d *diagnosis) levels(dst []finding, lost uint64) []finding {
	f := finding{kind: LevelChanged}
	for i, db := range d.block.levels.db {
		switch {
		case !d.block.levels.changed(i) || lost>>i&1 != 0:
		case db < fellDB && (d.layout.driving[i] < 0 || !d.driven[i]) && d.layout.q > 1:
			told, follows := d.follower.add(i, d.block.lines, d.at, d.perBlock)
			if !told {
				return dst
			}
			if follows {
				dst = append(dst, lostFollower(i))
				break
			}
			fallthrough
		default:
			f.channels = append(f.channels, i)
			if math.Abs(db) > math.Abs(f.value) {
				f.value = db
			}
		}
	}
	if len(dst) == 0 && len(f.channels) > 0 {
		d.takenAlong(&f)
		dst = append(dst, f)
	}
	return dst
}

// alongShare is the share of the largest change, in dB, below which a force's change is not its own: the structure takes
// other forces along.
const alongShare = 0.5

// takenAlong leaves in f the forces that changed by themselves.
func (d *diagnosis) takenAlong(f *finding) {
	f.channels = slices.DeleteFunc(f.channels, func(i int) bool {
		return !(d.block.levels.db[i]/f.value >= alongShare)
	})
}

func lostFollower(i int) finding {
	return finding{kind: ForceLost, key: i, channels: []int{i}, detail: " and only follows the others"}
}

package watch

import (
	"fmt"
	"slices"
	"strings"
	"testing"
)

// kindsTold are the events of a run but for bands of forces that depend on each other: kind and edge.
func (r *run) kindsTold() (told []string) {
	for _, e := range r.events {
		if e.Kind != ForcesCorrelated {
			told = append(told, fmt.Sprintf("%s %s", e.Kind, e.Edge))
		}
	}
	return told
}

func (r *run) expect(t *testing.T, want ...string) {
	t.Helper()
	if got := r.kindsTold(); !slices.Equal(got, want) {
		t.Errorf("%q, want %q\n%s", got, want, strings.Join(r.story(), "\n"))
	}
}

// at block k, between the blocks, a thing happens.
func (r *run) then(blocks int, do func()) {
	r.blocks(blocks)
	do()
}

// TestEmergencyStop: the stop of all shakers is named, averaging waits, and goes on by itself; the
// blocks in which they come to rest or set out are not averaged.
func TestEmergencyStop(t *testing.T) {
	for _, overlap := range []float64{0.5, 0.75} {
		r := newRun(newSimulated(11, simOptions{q: 2, p: 6, window: "hann", overlap: overlap}), nil)
		drive := slices.Clone(r.drive)
		var stop, start int64
		r.then(40, func() { stop = r.n; clear(r.drive) })
		r.blocks(30)
		if !r.last.Holds || !r.watch.Faults() || len(r.watch.Standing(nil)) == 0 {
			t.Error("averaging does not wait")
		}
		r.then(1, func() { start = r.n; copy(r.drive, drive) })
		r.blocks(40)
		r.end()
		r.expect(t, "no-drive raised", "no-drive cleared")
		for _, b := range r.averaged {
			if first := b * int64(r.hop); first < start && first+int64(r.rig.Grid.Block) > stop {
				t.Errorf("block %d was averaged", b)
			}
		}
		if last := r.averaged[len(r.averaged)-1]; last != r.block-1 {
			t.Errorf("averaging ended with block %d of %d", last, r.block)
		}
		if r.last.Holds || r.watch.Faults() {
			t.Error("averaging still waits")
		}
	}
}

// TestHalfTheHoldTime: a fault that is over when one block less than it takes was abnormal is a
// disturbance, and one that lasts a block longer is named.
func TestHalfTheHoldTime(t *testing.T) {
	for _, test := range []struct {
		samples int // that the sensor is loose for
		want    []string
	}{
		{100, []string{"disturbance raised"}},
		{1024 * 6, []string{"response-suspect raised", "response-suspect cleared"}},
	} {
		r := newRun(newSimulated(12, simOptions{q: 2, p: 6}), nil)
		from := int64(30*512 + 200)
		r.at = func(n int64) {
			switch n {
			case from:
				r.gain[r.q+3] = 0
			case from + int64(test.samples):
				r.gain[r.q+3] = 1
			}
		}
		r.blocks(60)
		r.end()
		r.expect(t, test.want...)
	}
}

// TestRingingAfterAKnock: narrow modes ring on for more blocks than hold the knock, and that is no change of
// the structure.
func TestRingingAfterAKnock(t *testing.T) {
	for k := range int64(8) {
		r := newRun(newSimulated(19, simOptions{q: 2, p: 6, lines: 1}), nil)
		r.at = func(n int64) {
			if n == 30*512+64*k {
				r.knock = 1e5
			}
		}
		r.blocks(60)
		r.end()
		r.expect(t, "disturbance raised")
	}
}

// TestTwoFaults: the second is named while the first, understood, stands, and nothing is said twice.
func TestTwoFaults(t *testing.T) {
	for _, test := range []struct {
		name          string
		first, second func(r *run)
		want          []string
	}{
		{"stinger, then sensor", func(r *run) { r.off[1] = shakerOff }, func(r *run) { r.gain[r.q+4] = 0.3 },
			[]string{"force-lost raised", "response-suspect raised"}},
		{"stinger off at the structure, then sensor", func(r *run) { r.off[1] = padOff }, func(r *run) { r.gain[r.q+4] = 0.3 },
			[]string{"force-lost raised", "response-suspect raised"}},
		{"pad, then sensor", func(r *run) { r.off[1], r.tip = padOff, 0.25 }, func(r *run) { r.gain[r.q+4] = 0.3 },
			[]string{"force-not-reaching raised", "response-suspect raised"}},
		{"sensor, then sensor", func(r *run) { r.gain[r.q+5] = 0.3 }, func(r *run) { r.gain[r.q+4] = 0.3 },
			[]string{"response-suspect raised", "response-suspect raised"}},
		{"sensor, then stinger", func(r *run) { r.gain[r.q+5] = 0.3 }, func(r *run) { r.off[1] = shakerOff },
			[]string{"response-suspect raised", "force-lost raised"}},
		{"pad, then drive", func(r *run) { r.off[1], r.tip = padOff, 0.25 }, func(r *run) { clear(r.drive) },
			[]string{"force-not-reaching raised", "no-drive raised", "force-not-reaching cleared"}},
		{"cable, then structure", func(r *run) { r.gain[r.q+5] = 0 }, func(r *run) { r.damping[3] *= 3 },
			[]string{"response-suspect raised", "structure-changed raised"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			r := newRun(newSimulated(13, simOptions{q: 3, p: 9}), nil)
			r.then(30, func() { test.first(r) })
			r.then(12, func() { test.second(r) })
			r.blocks(12)
			r.end()
			r.expect(t, test.want...)
		})
	}
}

// TestDrivesLock: two drives that are given one signal are found out long before the average shows it.
func TestDrivesLock(t *testing.T) {
	for seed := range 2 * *manySeeds {
		s := newSimulated(uint64(*firstSeed+seed), simOptions{q: 2, p: 4})
		s.armature[0], s.armature[1] = 0.02, 0.02 // so that the structure couples them little
		r := newRun(s, nil)
		r.then(60, func() { r.mix[0], r.mix[1] = 0.999, 0.999 })
		r.blocks(20)
		r.then(30, func() { clear(r.mix) })
		r.blocks(50)
		r.end()
		var told []string
		for _, e := range r.events {
			wide := 0.0
			for _, b := range e.BandsHz {
				wide += b[1] - b[0]
			}
			if wide > 500 {
				told = append(told, fmt.Sprintf("%s %s", e.Kind, e.Edge))
				if e.Edge == Raised && (e.Block < 60 || e.Block > 82) {
					t.Errorf("seed %d: named at block %d", *firstSeed+seed, e.Block)
				}
			}
		}
		if !slices.Equal(told, []string{"forces-correlated raised", "forces-correlated cleared"}) {
			t.Errorf("seed %d: %q\n%s", *firstSeed+seed, told, strings.Join(r.story(), "\n"))
		}
	}
}

// TestLostWithoutDrivingPoint: a force that falls by less than 20 dB and then only follows the others is lost, and one
// that falls as far and is driven changed its level.
func TestLostWithoutDrivingPoint(t *testing.T) {
	for _, test := range []struct {
		drive float64
		want  string
	}{{0, "force-lost raised"}, {4, "level-changed raised"}} {
		s := newSimulated(20, simOptions{q: 3, p: 6})
		for k := range s.rig.Responses {
			s.rig.Responses[k].Point = fmt.Sprint("elsewhere ", k)
		}
		s.armature[1] = 2 // so that it is not lost by its level alone
		r := newRun(s, nil)
		r.then(30, func() { r.drive[1] = test.drive })
		r.blocks(14)
		if db := r.watch.block.levels.db[1]; test.drive == 0 && (db < -18 || db > fellDB) {
			t.Errorf("it fell by %.1f dB: this tests something else", db)
		}
		r.end()
		r.expect(t, test.want)
	}
}

// TestCarryOn: the fault is named all the same, and nothing is set aside or learnt.
func TestCarryOn(t *testing.T) {
	r := newRun(newSimulated(14, simOptions{q: 2, p: 6, onFault: "carry-on"}), nil)
	r.then(30, func() { r.gain[r.q+3] = 0.3 })
	r.blocks(30)
	r.end()
	r.expect(t, "response-suspect raised")
	if text := r.events[len(r.events)-1].Text; strings.Contains(text, "waits") {
		t.Errorf("%q", text)
	}
	if len(r.averaged) != 60 || len(r.aside) != 0 {
		t.Errorf("%d averaged, %v aside", len(r.averaged), r.aside)
	}
}

// TestShakersLate: what was averaged before the shakers were switched on does no harm.
func TestShakersLate(t *testing.T) {
	s := newSimulated(15, simOptions{q: 2, p: 6})
	drive := slices.Clone(s.drive)
	clear(s.drive)
	r := newRun(s, nil)
	r.then(20, func() { copy(r.drive, drive) })
	r.blocks(40)
	r.then(0, func() { r.gain[r.q+4] = 0.3 })
	r.blocks(10)
	r.end()
	r.expect(t, "no-drive raised", "no-drive cleared", "response-suspect raised")
}

// TestStartOver: after it the watch knows nothing of before.
func TestStartOver(t *testing.T) {
	r := newRun(newSimulated(16, simOptions{q: 2, p: 6}), nil)
	r.then(30, func() { r.drive[0] *= 4 })
	r.blocks(10)
	if reasons := r.watch.Standing(nil); len(reasons) != 1 || !strings.Contains(reasons[0], "start the average over") {
		t.Errorf("reasons %q", reasons)
	}
	r.watch.StartOver()
	if r.watch.Wants(0) || r.watch.Wants(7) || !r.watch.Wants(8) || len(r.watch.Standing(nil)) > 0 {
		t.Error("something is left")
	}
	r.blocks(1)
	if r.last.Armed {
		t.Error("armed without an average")
	}
}

func TestWants(t *testing.T) {
	for _, test := range []struct {
		options simOptions
		want    []int // up to 40
	}{
		{simOptions{q: 1, p: 1}, []int{8, 9, 10, 11, 12, 13, 14, 15, 16, 18, 20, 22, 24, 27, 30, 33, 37}},
		{simOptions{q: 4, p: 1}, []int{12, 13, 14, 15, 16, 18, 20, 22, 24, 27, 30, 33, 37}},
		{simOptions{q: 2, p: 1, excitation: "periodic"}, []int{6, 7, 8, 9, 10, 11, 12, 13, 14, 15, 16, 18, 20, 22, 24, 27, 30, 33, 37}},
		{simOptions{q: 2, p: 1, memory: 16}, []int{8, 9, 10, 11, 12, 13, 14, 15, 16, 18, 20, 22, 24, 26, 28, 30, 32, 34, 36, 38, 40}},
	} {
		w := New(newSimulated(1, test.options).rig, Options{})
		var got []int
		for m := range 41 {
			if w.Wants(m) {
				got = append(got, m)
				w.learntAt = m
			}
		}
		if !slices.Equal(got, test.want) {
			t.Errorf("%+v: %v, want %v", test.options, got, test.want)
		}
	}
}

// TestNoiseNamesTheStop: with the noise known, a force that fell by less than 20 dB but into its noise is
// lost.
func TestNoiseNamesTheStop(t *testing.T) {
	s := newSimulated(17, simOptions{q: 2, p: 6})
	for i := range s.drive {
		s.drive[i], s.noise[i] = 10, 2
	}
	c := s.q + s.p
	noise := make([]float64, s.rig.Grid.Lines*c)
	for k := range s.rig.Grid.Lines {
		for ch := range c {
			noise[k*c+ch] = s.noise[ch] * s.noise[ch] / (s.rig.Grid.RateHz / 2)
		}
	}
	r := newRun(s, noise)
	r.then(30, func() { clear(r.drive) })
	r.blocks(10)
	r.end()
	r.expect(t, "no-drive raised")
}

// TestSameOnAnyWorkers: the events and the judgements do not depend on how the work is shared out.
func TestSameOnAnyWorkers(t *testing.T) {
	tell := func(o Options) string {
		s := newSimulated(18, simOptions{q: 2, p: 6})
		r := newRun(s, nil)
		r.watch = New(s.rig, o)
		r.then(30, func() { r.damping[3] *= 2 })
		r.blocks(10)
		r.end()
		return fmt.Sprint(r.events, r.averaged)
	}
	one := tell(Options{})
	backwards := func(items int, do func(worker, item int)) {
		for item := range items {
			do(item%3, items-1-item)
		}
	}
	if other := tell(Options{Each: backwards, Workers: 3}); other != one {
		t.Errorf("%s\nis not\n%s", other, one)
	}
	if !strings.Contains(one, string(StructureChanged)) {
		t.Error("nothing was found")
	}
}

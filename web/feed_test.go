package web

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// A feed is a run with invented numbers: blocks are made in the frequency domain, from forces that are
// noise, a structure of a few modes, and noise on the responses.
type feed struct {
	rig      *rig.Rig
	rng      *rand.Rand
	average  *spectra.Average
	snapshot *spectra.Snapshot
	h        []complex128 // (L,p,q)
	progress estimate.Progress
	target   estimate.Target
	points   []estimate.DrivingPoint
	block    []complex128
	spare    *estimate.Estimates
	seen     int64
}

// hostile is a name that would do harm if it ever became markup.
const hostile = `<img src=x onerror=alert(1)>`

// madeRig is a rig of q forces and p responses at points of their own with spectra of the given number of
// lines, every force with a driving point. The second response has a hostile name.
func madeRig(t testing.TB, q, p, lines int) *rig.Rig {
	var text strings.Builder
	const spacingHz = 0.625
	fmt.Fprintf(&text, "title = \"Made up, %d by %d\"\n[source]\nkind = \"demo\"\nrate = %d\n[analysis]\nmax_frequency = %g\nmin_frequency = 10.0\nline_spacing = %g\n",
		q, p, int(math.Ceil(2.56*spacingHz*float64(lines-1))), spacingHz*float64(lines-1), spacingHz)
	for i := range q {
		fmt.Fprintf(&text, "[[force]]\nchannel = %d\nname = \"S%d\"\npoint = \"%d\"\naxis = \"+z\"\nsensitivity = 0.01\n", i+1, i+1, i+1)
	}
	for o := range p {
		name := fmt.Sprintf("A%dz", o+1)
		if o == 1 {
			name = hostile
		}
		fmt.Fprintf(&text, "[[response]]\nchannel = %d\nname = \"%s\"\npoint = \"%d\"\naxis = \"+z\"\nsensitivity = 0.01\n", q+o+1, name, o+1)
	}
	columns := max(7, int(math.Sqrt(3*float64(p))))
	for o := range p {
		fmt.Fprintf(&text, "[[point]]\nname = \"%d\"\nx = %g\ny = %g\nz = %g\n", o+1, 0.5*float64(o%columns), 0.8*float64(o/columns), 0.3*float64(o%3))
	}
	r, err := rig.Parse("made.toml", []byte(text.String()))
	if err != nil {
		t.Fatal(err)
	}
	if r.Grid.Lines != lines {
		t.Fatalf("made rig has %d lines, wanted %d", r.Grid.Lines, lines)
	}
	return r
}

func newFeed(t testing.TB, q, p, lines int) *feed {
	r := madeRig(t, q, p, lines)
	s := spectra.Shape{Lines: lines, Forces: q, Responses: p}
	window := spectra.Window(r.Analysis.Window).Values(r.Grid.Block)
	f := &feed{
		rig:      r,
		rng:      rand.New(rand.NewPCG(1, 2)),
		average:  spectra.NewAverage(s, window, r.Grid.Hop, r.Grid.Decimation, r.Grid.RateHz, spectra.Averaging{}),
		snapshot: spectra.NewSnapshot(s, spectra.Averaging{}),
		h:        make([]complex128, lines*p*q),
		target:   estimate.NewTarget(r),
		block:    make([]complex128, lines*(p+q)),
	}
	f.points = estimate.DrivingPoints(r)
	f.structure()
	f.spare = f.estimates()
	return f
}

func (f *feed) estimates() *estimate.Estimates {
	return estimate.New(f.average.Shape(), estimate.Method{Points: f.points})
}

// structure fills h: modes spread over the band, with the shapes of a string.
func (f *feed) structure() {
	s := f.average.Shape()
	const modes = 7
	for k := range s.Lines {
		w := float64(k) / float64(s.Lines-1)
		for o := range s.Responses {
			for i := range s.Forces {
				sum := complex(0.002, 0)
				for m := range modes {
					w0 := 0.08 + 0.12*float64(m)
					shape := func(n int) float64 { return math.Sin(float64(m+1) * (0.35 + 0.61*float64(n))) }
					sum += complex(-0.02*w*w*shape(o)*shape(i), 0) / complex(w0*w0-w*w, 2*0.02*w0*w)
				}
				f.h[(k*s.Responses+o)*s.Forces+i] = sum
			}
		}
	}
}

// add averages n more blocks.
func (f *feed) add(n int) {
	s := f.average.Shape()
	normal := func(size float64) complex128 {
		return complex(size*f.rng.NormFloat64(), size*f.rng.NormFloat64())
	}
	for range n {
		for k := range s.Lines {
			x := f.block[k*s.Channels():][:s.Forces]
			y := f.block[k*s.Channels()+s.Forces:][:s.Responses]
			// The structure takes the force away at its modes, and couples the shakers a little there.
			drop := 1 / (1 + 8*cmplx.Abs(f.h[k*s.Responses*s.Forces]))
			shared := normal(40 * (1 - drop))
			for i := range x {
				x[i] = normal(100*drop) + shared
			}
			for o := range y {
				y[o] = normal(0.4 * (1 + float64(o%5)))
				for i := range x {
					y[o] += f.h[(k*s.Responses+o)*s.Forces+i] * x[i]
				}
			}
		}
		f.average.Sum([][]complex128{f.block}, 0, s.Lines)
		f.average.Count(f.seen * int64(f.rig.Grid.Hop*f.rig.Grid.Decimation))
		f.seen++
	}
}

// refresh publishes the average as it stands and returns what was published.
func (f *feed) refresh(h *Hub) (Status, *estimate.Estimates) {
	if f.spare == nil {
		f.spare = f.estimates()
	}
	e := f.spare
	f.average.SnapshotTo(f.snapshot)
	e.Update(f.snapshot)
	f.progress.Update(e, f.target)
	hopS := float64(f.rig.Grid.Hop) / f.rig.Grid.RateHz
	needed := f.progress.AveragesNeeded
	st := Status{
		TimeS: hopS * float64(f.seen+1), Seen: f.seen + 5, Averaged: f.seen, SetAside: 5, Gaps: 1, Overranges: 2,
		EffectiveAverages: e.EffectiveAverages,
		AveragesNeeded:    needed,
		TimeToGoS:         estimate.Number(hopS * max(float64(needed)-float64(f.seen), 0)),
		Progress:          &f.progress,
		Gxx:               f.snapshot.Gxx,
	}
	names := newNames(f.rig, nil)
	st.Verdict = estimate.Judge(e, &f.progress, f.target, nil, func(n int) string {
		return names.frf(n/len(f.rig.Forces), n%len(f.rig.Forces))
	})
	f.spare = h.Refresh(st, e)
	return st, e
}

// levels are some for a moment of the run; the channel with index loud is at its limit.
func (f *feed) levels(timeS float64, loud int) Levels {
	n := f.average.Shape().Channels()
	rng := rand.New(rand.NewPCG(1, uint64(10*timeS))) // the feed's own may be in use
	l := Levels{TimeS: timeS, RMS: make([]float64, n), Peak: make([]float64, n), Block: math.Mod(timeS, 1)}
	for i := range n {
		l.RMS[i] = 0.05 + 0.1*rng.Float64()
		l.Peak[i] = l.RMS[i] * (2.5 + rng.Float64())
		if i == loud {
			l.Peak[i] = 1
		}
	}
	return l
}

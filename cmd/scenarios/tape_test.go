package main

import (
	"errors"
	"io"
	"slices"
	"testing"

	"shakerwatch/acquire"
	"shakerwatch/acquire/demo"
)

// drain reads a source to its end, or so many frames. Lost ones are -9 in all channels.
func drain(t *testing.T, s acquire.Source, frames, portion int) (samples []float64) {
	t.Helper()
	buf := make([]float64, portion*s.Channels())
	for len(samples) < frames*s.Channels() {
		n, err := s.Read(buf)
		if gap, ok := errors.AsType[*acquire.GapError](err); ok {
			samples = append(samples, slices.Repeat([]float64{-9}, int(gap.Frames)*s.Channels())...)
			continue
		}
		if err == io.EOF {
			break
		}
		if err != nil || n == 0 {
			t.Fatal(n, err)
		}
		samples = append(samples, buf[:n*s.Channels()]...)
	}
	return samples
}

func TestTapePlaysWhatItRecorded(t *testing.T) {
	source := func() acquire.Source {
		s, err := demo.New(demo.Rig(), 3)
		if err != nil {
			t.Fatal(err)
		}
		lost := demo.Fault{Kind: "lost", FromS: 1, Amount: 300}
		end := demo.Fault{Kind: "lost", FromS: 2, Amount: 9000} // goes on behind the end of the tape
		if err := s.SetFaults(lost, end); err != nil {
			t.Fatal(err)
		}
		return s
	}
	const frames = 6000 // 2560 a second
	tape, err := record(source(), frames)
	if err != nil {
		t.Fatal(err)
	}
	want := drain(t, source(), frames, 1000)[:frames*16]
	for _, portion := range []int{1, 700, 5000} {
		player := tape.play()
		if got := drain(t, player, 1<<40, portion); !slices.Equal(got, want) {
			t.Errorf("portions of %d: %d samples, other than the %d recorded", portion, len(got), len(want))
		}
		if _, err := player.Read(make([]float64, 16)); err != io.EOF {
			t.Errorf("behind the end: %v, want io.EOF again", err)
		}
	}
}

func TestTapeOfABrokenSource(t *testing.T) {
	if _, err := record(broken{}, 10); !errors.Is(err, io.ErrUnexpectedEOF) {
		t.Errorf("%v, want the source's error", err)
	}
}

type broken struct{}

func (broken) RateHz() float64             { return 1 }
func (broken) Channels() int               { return 1 }
func (broken) Read([]float64) (int, error) { return 0, io.ErrUnexpectedEOF }

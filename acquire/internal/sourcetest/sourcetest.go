// Package sourcetest checks that a source keeps the contract of acquire.Source. Every kind of
// source calls it from its tests. It knows no kind of source.
package sourcetest

import (
	"errors"
	"io"
	"math"
	"math/rand/v2"
	"testing"

	"shakerwatch/acquire"
)

// A Stretch is a run of frames without loss, or a run of lost ones.
type Stretch struct {
	Lost    int64     // number of lost frames; 0 for a run of frames
	Samples []float64 // channel fastest; nil for lost frames
}

// Drain reads s to its end with buffers of random length (up to maxFrames frames, fixed seed),
// fails t on every return that the contract does not list, and returns the stretches read,
// neighbours of one kind joined, and the error that ended them.
func Drain(t testing.TB, s acquire.Source, maxFrames int) ([]Stretch, error) {
	t.Helper()
	channels := s.Channels()
	if channels < 1 {
		t.Fatalf("Channels() = %d: want at least 1", channels)
	}
	if !(s.RateHz() > 0) {
		t.Fatalf("RateHz() = %v: want a positive rate", s.RateHz())
	}
	rng := rand.New(rand.NewPCG(1, 2))
	guard := math.Float64frombits(0x7ff8_0000_dead_beef) // a NaN with a payload that no source writes
	buf := make([]float64, maxFrames*channels+1)
	var read []Stretch
	for {
		frames := 1 + rng.IntN(maxFrames)
		buf[frames*channels] = guard
		n, err := s.Read(buf[: frames*channels : frames*channels])
		if math.Float64bits(buf[frames*channels]) != math.Float64bits(guard) {
			t.Fatal("Read wrote behind its buffer")
		}
		var gap *acquire.GapError
		switch {
		case err == nil && n > 0 && n <= frames:
			if len(read) == 0 || read[len(read)-1].Lost > 0 {
				read = append(read, Stretch{})
			}
			last := &read[len(read)-1]
			last.Samples = append(last.Samples, buf[:n*channels]...)
		case errors.As(err, &gap) && n == 0 && gap.Frames > 0:
			if len(read) == 0 || read[len(read)-1].Lost == 0 {
				read = append(read, Stretch{})
			}
			read[len(read)-1].Lost += gap.Frames
		case err != nil && n == 0:
			for range 3 {
				if n, again := s.Read(buf[:channels]); n != 0 || again == nil || again.Error() != err.Error() {
					t.Fatalf("Read after the end = %d, %v: want 0, %v again", n, again, err)
				}
			}
			if errors.Is(err, io.EOF) {
				err = io.EOF
			}
			return read, err
		default:
			t.Fatalf("Read of %d frames = %d, %v: not in the contract", frames, n, err)
		}
	}
}

// Package acquire holds the Source that every kind of input satisfies and the marks for lost
// frames. A room for each kind of source, for the rig file and for the decimator lies below it.
//
// It knows samples, channels and source positions. It may not know spectra, verdicts or plots.
//
// A frame is one sample of every channel. A sample is a fraction of digital full scale, in [-1, 1)
// for integer encodings; floating-point encodings may go beyond.
package acquire

import "fmt"

// A Source delivers frames in the order in which they were captured.
//
// A Source serves one goroutine at a time.
type Source interface {
	// RateHz is the number of frames per second.
	RateHz() float64

	// Channels is the number of samples in a frame, at least 1.
	Channels() int

	// Read fills dst with whole frames, channel fastest, and returns how many. len(dst) is a
	// positive multiple of Channels(). Read keeps no hold of dst. Nothing but this is returned:
	//
	//  1. n > 0,  err == nil: n frames that follow the last ones without loss
	//  2. n == 0, *GapError:  frames were lost here; the next Read goes on behind them
	//  3. n == 0, other err:  ended (io.EOF) or broken; every later Read says the same
	Read(dst []float64) (n int, err error)
}

// A GapError says that frames were lost between the last Read and the next.
type GapError struct {
	Frames int64 // how many, at least 1
}

func (e *GapError) Error() string {
	return fmt.Sprintf("%d frames were lost", e.Frames)
}

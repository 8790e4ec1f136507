// Package pipe holds the source of raw little-endian frames from a reader, such as standard input.
//
// It knows bytes, samples and channels. It may not know who writes the frames, nor which channel
// carries what.
package pipe

import (
	"errors"
	"fmt"
	"io"
	"os"
)

// A Source delivers the frames that a reader gives: samples of one encoding, little endian, channel
// fastest, nothing between them. It has no gaps of its own.
//
// Floating-point samples pass through as they are. NaN and infinity are for acquire.Select, around
// this source, to turn into lost frames where a channel in use holds them. Finite values are data
// however large they are: a range that makes sense is known only where volts are, and there they
// are beyond the limit of their channel.
//
// A Source serves one goroutine at a time; the reader may be closed from another, see Read.
type Source struct {
	r        io.Reader
	rateHz   float64
	channels int
	encoding Encoding

	buf    []byte // whole frames long
	ready  []byte // the part of buf that was not handed out
	frames int64  // handed out
	err    error  // what Read says once no whole frame is ready
}

// bufferBytes is what a pipe holds on Linux by default, 64 KiB (pipe(7)): one read can empty it.
const bufferBytes = 1 << 16

// maxEmptyReads in a row, without an error, end a source (own choice, as bufio in Go's library).
const maxEmptyReads = 100

// New returns a source of the frames that r gives. It panics when rateHz or channels are not
// positive or the encoding is none of the constants.
func New(r io.Reader, rateHz float64, channels int, encoding Encoding) *Source {
	if !(rateHz > 0) || channels < 1 || encoding.Bytes() == 0 {
		panic(fmt.Sprintf("pipe: %d channels of %v at %v frames/s", channels, encoding, rateHz))
	}
	frame := channels * encoding.Bytes()
	return &Source{
		r: r, rateHz: rateHz, channels: channels, encoding: encoding,
		buf: make([]byte, max(1, bufferBytes/frame)*frame),
	}
}

// RateHz is the number of frames per second that New was told.
func (s *Source) RateHz() float64 { return s.rateHz }

// Channels is the number of samples in a frame that New was told.
func (s *Source) Channels() int { return s.channels }

// Read is that of acquire.Source; it panics when len(dst) is not a positive multiple of Channels().
// It returns as soon as one whole frame is there and allocates nothing.
//
// While the writer stalls, Read waits for as long as that lasts. What ends it is closing the reader
// from another goroutine, if the reader is of a kind that then returns: see Closable for files.
// That is a clean end, io.EOF, as is the end of the reader, even inside a frame: see Leftover.
// Any other error of the reader ends the source after the last whole frame that came before it.
func (s *Source) Read(dst []float64) (n int, err error) {
	if len(dst) == 0 || len(dst)%s.channels != 0 {
		panic("pipe: length of dst is not a positive multiple of the channels")
	}
	width := s.encoding.Bytes()
	frame := s.channels * width
	for empty := 0; len(s.ready) < frame; empty++ {
		if s.err != nil {
			return 0, s.err
		}
		if s.fill() {
			empty = 0
		} else if empty == maxEmptyReads {
			s.end(io.ErrNoProgress)
		}
	}
	n = min(len(dst)/s.channels, len(s.ready)/frame)
	s.encoding.decode(dst[:n*s.channels], s.ready)
	s.ready = s.ready[n*frame:]
	s.frames += int64(n)
	return n, nil
}

// fill reads once, behind the part of a frame that is ready, and tells whether something came.
func (s *Source) fill() bool {
	kept := copy(s.buf, s.ready)
	n, err := s.r.Read(s.buf[kept:])
	s.ready = s.buf[:kept+n]
	if err != nil {
		s.end(err)
	}
	return n > 0
}

// end keeps what ended the source.
func (s *Source) end(err error) {
	switch {
	case err == io.EOF, errors.Is(err, os.ErrClosed), errors.Is(err, io.ErrClosedPipe):
		s.err = io.EOF
	default:
		whole := s.frames + int64(len(s.ready)/(s.channels*s.encoding.Bytes()))
		s.err = fmt.Errorf("pipe after frame %d: %w: check the program that writes into it", whole, err)
	}
}

// Leftover is the number of bytes behind the last whole frame, once Read has returned an error. Not
// 0, it says that the writer was cut off inside a frame, or that the encoding or the number of
// channels is not the writer's.
func (s *Source) Leftover() int {
	if s.err == nil {
		return 0
	}
	return len(s.ready) % (s.channels * s.encoding.Bytes())
}

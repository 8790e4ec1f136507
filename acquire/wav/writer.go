package wav

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"os"
)

// A Writer makes a recording of floating-point samples. It begins as RIFF and becomes RF64 when it
// grows beyond 4 GiB. What is on disk can be read at any time: see RefreshHeader.
//
// A Writer serves one goroutine at a time.
type Writer struct {
	f       file
	path    string
	format  format
	maxRIFF uint64 // a larger form becomes RF64

	frames int64  // taken by Write
	bytes  int64  // of samples in the file; not of whole frames after a write error
	buf    []byte // samples on their way to the file, whole frames
	filled int    // bytes of buf in use
	header []byte // memory for the header
	err    error  // the first that happened; nothing is written after it
	closed bool
	result error // what Close returned
}

// file is the part of os.File that a Writer needs.
type file interface {
	io.WriterAt
	io.Closer
	Truncate(size int64) error
	Sync() error
}

// largestRIFF is the largest form whose 32-bit size is not all ones, which would mean RF64.
const largestRIFF = unknown32 - 1

// Create makes a recording at path. rateHz is a whole number of at least 1, channels at least 1 and
// encoding Float32 or Float64.
//
// A file that exists is not touched: the error is fs.ErrExist then, since a recording cannot be
// made again. When Create returns an error it leaves no file behind.
func Create(path string, rateHz float64, channels int, encoding Encoding) (*Writer, error) {
	format, err := writable(rateHz, channels, encoding)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	f, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE|os.O_EXCL, 0o666)
	switch {
	case errors.Is(err, fs.ErrExist):
		return nil, fmt.Errorf("%s: %w: choose another name, or move it away", path, cause(err))
	case err != nil:
		return nil, fmt.Errorf("%s: %w: check the folder and its permissions", path, cause(err))
	}
	w, err := newWriter(f, path, format)
	if err != nil {
		f.Close()
		os.Remove(path)
		return nil, err
	}
	return w, nil
}

// writable checks that a WAV header can say it.
func writable(rateHz float64, channels int, encoding Encoding) (format, error) {
	switch {
	case !encoding.isFloat():
		return format{}, fmt.Errorf("%v is not written: choose IEEE float 32 or 64 bit", encoding)
	case !(rateHz >= 1 && rateHz < 1<<32) || rateHz != math.Trunc(rateHz):
		return format{}, fmt.Errorf("rate of %v frames/s: a WAV header holds whole numbers from 1 on, choose one", rateHz)
	case channels < 1 || channels > math.MaxUint16/encoding.Bytes():
		return format{}, fmt.Errorf("%d channels: a WAV file of %v holds 1 to %d, choose fewer", channels, encoding, math.MaxUint16/encoding.Bytes())
	}
	f := format{encoding, channels, uint32(rateHz), 8 * encoding.Bytes()}
	if rateHz*float64(f.frameBytes()) > math.MaxUint32 {
		return format{}, fmt.Errorf("%v frames/s of %d channels: a WAV header holds less than 4 GiB/s, choose less", rateHz, channels)
	}
	return f, nil
}

func newWriter(f file, path string, format format) (*Writer, error) {
	w := &Writer{f: f, path: path, format: format, maxRIFF: largestRIFF}
	w.buf = make([]byte, bufferBytes/format.frameBytes()*format.frameBytes())
	w.header = make([]byte, 0, headerBytes(format))
	if err := w.writeHeader(); err != nil {
		return nil, fmt.Errorf("%s: %w: check the space on the disk", path, cause(err))
	}
	return w, nil
}

// Frames is the number of frames that Write took.
func (w *Writer) Frames() int64 { return w.frames }

// Write appends frames, channel fastest; it panics when len(frames) is not a multiple of the
// channels. It keeps no hold of frames and allocates nothing.
//
// With Float32 each value is rounded to the nearest float32; beyond its range (3.4e38) it becomes
// infinite. With Float64 every bit is kept, also those of a NaN.
//
// After an error nothing more is written, so that no hole can come into the recording unseen: every
// later Write and RefreshHeader returns the first error.
func (w *Writer) Write(frames []float64) error {
	if len(frames)%w.format.channels != 0 {
		panic("wav: length of frames is not a multiple of the channels")
	}
	width := w.format.encoding.Bytes()
	for len(frames) > 0 {
		if w.err != nil {
			return w.err
		}
		n := min(len(frames), (len(w.buf)-w.filled)/width)
		w.format.encoding.encode(w.buf[w.filled:], frames[:n])
		w.filled += n * width
		w.frames += int64(n / w.format.channels)
		frames = frames[n:]
		if w.filled == len(w.buf) {
			w.flush()
		}
	}
	return w.err
}

// flush moves buf, which is empty after an error, to the file.
func (w *Writer) flush() {
	if w.filled == 0 {
		return
	}
	n, err := w.f.WriteAt(w.buf[:w.filled], int64(headerBytes(w.format))+w.bytes)
	w.bytes += int64(n)
	w.filled = 0
	w.fail(err)
}

// fail keeps the first error.
func (w *Writer) fail(err error) {
	if w.err == nil && err != nil {
		w.err = fmt.Errorf("%s: recording stopped after frame %d: %w: check the space on the disk and its cable",
			w.path, w.wholeFrames(), cause(err))
	}
}

// wholeFrames is the number of whole frames in the file.
func (w *Writer) wholeFrames() int64 { return w.bytes / int64(w.format.frameBytes()) }

// RefreshHeader brings the file up to date with every frame written so far: first the samples, then,
// when the disk has them, the header that counts them. So the file can be read whatever happens: a
// process that is killed loses at most what came after its last RefreshHeader, a machine that loses
// power at most what came after the last but one. It waits for the disk.
func (w *Writer) RefreshHeader() error {
	w.flush()
	if w.err == nil {
		w.fail(w.sync())
	}
	if w.err == nil {
		w.fail(w.writeHeader())
	}
	return w.err
}

// sync waits until the disk has what was written. A file system that cannot promise it is no reason
// to stop recording.
func (w *Writer) sync() error {
	if err := w.f.Sync(); !errors.Is(err, errors.ErrUnsupported) {
		return err
	}
	return nil
}

// writeHeader counts the whole frames in the file.
func (w *Writer) writeHeader() error {
	w.header = appendHeader(w.header[:0], w.format, w.wholeFrames(), w.maxRIFF)
	_, err := w.f.WriteAt(w.header, 0)
	return err
}

// Close brings the file up to date and closes it. After an error, too, the file is made readable if
// the disk allows it: cut to its last whole frame, with a header that counts those. Close returns
// the first error of the Writer. Closing again changes nothing and returns the same; a later Write
// returns os.ErrClosed.
func (w *Writer) Close() error {
	if w.closed {
		return w.result
	}
	w.closed = true
	if w.RefreshHeader() != nil {
		w.salvage()
	} else {
		w.fail(w.sync())
	}
	w.fail(w.f.Close())
	w.result, w.err = w.err, fmt.Errorf("%s: %w", w.path, os.ErrClosed)
	return w.result
}

// salvage makes the file readable after an error. Neither step needs space on the disk. Where cutting
// does not work, part of a frame stays behind the samples, which readers of the header do not see.
func (w *Writer) salvage() {
	w.f.Truncate(int64(headerBytes(w.format)) + w.wholeFrames()*int64(w.format.frameBytes()))
	if err := w.writeHeader(); err != nil {
		w.err = fmt.Errorf("%w; its header was left as it last was: %w", w.err, cause(err))
	}
}

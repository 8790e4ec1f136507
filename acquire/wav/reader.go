package wav

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"os"

	"shakerwatch/acquire"
)

// A Reader is a recording as a source. It is an acquire.Source without gaps.
//
// A Reader serves one goroutine at a time.
type Reader struct {
	r        io.ReaderAt
	closer   io.Closer // nil when the file is the caller's
	name     string
	format   format
	dataPos  int64
	frames   int64 // in the recording
	warnings []string

	next  int64  // first frame that is not in buf yet
	buf   []byte // bytes as they are in the file, whole frames
	ready []byte // the part of buf that Read has not handed out
	err   error  // what Read says once ready is empty
}

var _ acquire.Source = (*Reader)(nil)

// bufferBytes is what is read from the file at once: 64 KiB, which holds the largest frame (block
// align is a 16-bit number) and is common practice for sequential reading.
const bufferBytes = 1 << 16

// Open opens the recording at path. The error of a file that cannot be used is one line,
// "FILE: what is wrong: what to do".
func Open(path string) (*Reader, error) {
	f, size, err := openRegular(path)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	r, err := NewReader(f, size, path)
	if err != nil {
		f.Close()
		return nil, err
	}
	r.closer = f
	return r, nil
}

func openRegular(path string) (*os.File, int64, error) {
	// Looked at before it is opened: opening a pipe waits for its writer.
	info, err := os.Stat(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil, 0, fmt.Errorf("%w: check the name and the folder", cause(err))
	case err != nil:
		return nil, 0, fmt.Errorf("%w: check the name and the permissions", cause(err))
	case info.IsDir():
		return nil, 0, errors.New("is a folder: give a recording inside it")
	case !info.Mode().IsRegular():
		return nil, 0, errors.New("is no regular file: give a recording that is a file")
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, 0, fmt.Errorf("%w: check the permissions", cause(err))
	}
	if info, err = f.Stat(); err != nil {
		f.Close()
		return nil, 0, fmt.Errorf("%w: check the disk it lies on", cause(err))
	}
	return f, info.Size(), nil
}

// cause is err without the operation and the path, which our own errors begin with.
func cause(err error) error {
	if path, ok := errors.AsType[*fs.PathError](err); ok {
		return path.Err
	}
	return err
}

// NewReader reads the recording in the first size bytes of r. name stands for the file in errors and
// warnings. Closing the Reader leaves r open.
func NewReader(r io.ReaderAt, size int64, name string) (*Reader, error) {
	h, err := readHeader(r, size)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	w := &Reader{r: r, name: name, format: h.format, dataPos: h.dataPos}
	if err := w.measure(h, size); err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	frame := w.format.frameBytes()
	w.buf = make([]byte, min(bufferBytes/int64(frame), w.frames)*int64(frame))
	w.checkValidBits()
	return w, nil
}

// measure finds how many frames there are, and warns where that is not what the header says.
func (r *Reader) measure(h header, size int64) error {
	frame := uint64(h.format.frameBytes())
	there := uint64(size - h.dataPos)
	bytes := min(h.dataBytes, there)
	if !h.dataKnown {
		empty, err := onlyChunks(r.r, h.dataPos, size)
		if err != nil {
			return err
		}
		if !empty {
			bytes = there
		}
	}
	r.frames = int64(bytes / frame)
	switch rest := bytes % frame; {
	case r.frames == 0:
		return fmt.Errorf("no frames, the data chunk holds %d bytes and a frame has %d: record again", bytes, frame)
	case !h.dataKnown:
		r.warn("the header does not say how long the recording is, as when a recorder is killed: read to the end of the file, %d frames", r.frames)
	case h.dataBytes > there:
		r.warn("the recording is cut short: the header says %d frames, the %d that are there are read", h.dataBytes/frame, r.frames)
	case rest > 0:
		r.warn("the data chunk ends inside a frame: its last %d bytes are not read, the %d frames before are", rest, r.frames)
	}
	return nil
}

func (r *Reader) warn(text string, args ...any) {
	r.warnings = append(r.warnings, r.name+": "+fmt.Sprintf(text, args...))
}

// checkValidBits warns when, in the first buffer, bits are set that the header calls unused: then
// either the header is wrong, or the samples are right-justified against the standard and all
// levels come out too low.
func (r *Reader) checkValidBits() {
	width := r.format.encoding.Bytes()
	unused := 8*width - r.format.validBits
	if r.format.encoding.isFloat() || unused == 0 {
		return
	}
	r.fill()
	for at := 0; at < len(r.ready); at += width {
		var sample uint32
		for i, b := range r.ready[at : at+width] {
			sample |= uint32(b) << (8 * i)
		}
		if sample&(1<<unused-1) != 0 {
			r.warn("the header says %d valid bits of %d, yet bits below are set: if its levels are %.0f dB too low, its samples are right-justified; export it again",
				r.format.validBits, 8*width, 20*float64(unused)*math.Log10(2))
			return
		}
	}
}

// RateHz is the number of frames per second, a whole number.
func (r *Reader) RateHz() float64 { return float64(r.format.rateHz) }

// Channels is the number of samples in a frame.
func (r *Reader) Channels() int { return r.format.channels }

// Frames is the number of whole frames in the recording, at least 1, wherever reading stands.
func (r *Reader) Frames() int64 { return r.frames }

// Encoding says how the samples are stored.
func (r *Reader) Encoding() Encoding { return r.format.encoding }

// Warnings are what the user should know about a recording that can be read nevertheless, one
// sentence each, beginning with the file's name. The slice is the caller's to read only.
func (r *Reader) Warnings() []string { return r.warnings }

// Read is that of acquire.Source; it panics when len(dst) is not a positive multiple of Channels().
// It hands out at most 64 KiB of the file at a time and allocates nothing. NaN and infinity in
// floating-point samples pass through. A file that cannot be read on is an error after its last
// readable whole frame.
func (r *Reader) Read(dst []float64) (n int, err error) {
	if len(dst) == 0 || len(dst)%r.format.channels != 0 {
		panic("wav: length of dst is not a positive multiple of the channels")
	}
	if len(r.ready) == 0 {
		r.fill()
	}
	if len(r.ready) == 0 {
		return 0, r.err
	}
	samples := min(len(dst), len(r.ready)/r.format.encoding.Bytes())
	bytes := samples * r.format.encoding.Bytes()
	r.format.encoding.decode(dst[:samples], r.ready[:bytes])
	r.ready = r.ready[bytes:]
	return samples / r.format.channels, nil
}

// fill makes frames ready, or sets err, or both.
func (r *Reader) fill() {
	if r.err != nil {
		return
	}
	if r.next == r.frames {
		r.err = io.EOF
		return
	}
	frame := int64(r.format.frameBytes())
	want := min(int64(len(r.buf)), (r.frames-r.next)*frame)
	n, err := readFull(r.r, r.buf[:want], r.dataPos+r.next*frame)
	whole := int64(n) / frame
	r.ready = r.buf[:whole*frame]
	r.next += whole
	if err == io.ErrUnexpectedEOF {
		err = errors.New("the file became shorter while it was read")
	}
	if err != nil {
		r.err = fmt.Errorf("%s: frame %d: %w: check the disk it lies on, or copy it again", r.name, r.next, err)
	}
}

// Close closes the file that Open opened. Every later Read says that the file is closed.
func (r *Reader) Close() error {
	r.ready, r.err = nil, fmt.Errorf("%s: %w", r.name, os.ErrClosed)
	if r.closer == nil {
		return nil
	}
	closer := r.closer
	r.closer = nil
	return closer.Close()
}

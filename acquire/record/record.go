// Package record holds the recorder: a tee around a source that keeps every captured frame in a
// WAV file, and never lets the capture wait for the disk.
//
// It knows frames, losses and files. It may not know which channel carries what, nor what else
// becomes of the frames.
package record

import (
	"sync/atomic"
	"time"

	"shakerwatch/acquire/wav"
)

// A Recorder writes what its Tee is read for into a file, on a goroutine of its own, which ends with
// Close.
//
// The file has a frame for every frame of the source's grid: frames that the source lost, and those
// that the disk was too slow for, stand in it as NaN in every channel. So a replay sees the same
// frames at the same positions, and gaps where something is missing.
//
// While the disk keeps up, a process that is killed loses at most the last second: the file can be
// read at any time, up to a refresh that is younger than that.
//
// A long gap is written to its true length, at the speed of the disk, piece by piece; frames that
// come meanwhile wait in the queue, and are dropped when that is full. A source that knows of a long
// gap while it lasts does better to report it in pieces: the recording then grows as fast as if
// nothing was lost, and has caught up when frames come again.
//
// Its methods may be called from several goroutines.
type Recorder struct {
	path       string
	rateHz     float64
	file       file
	frameBytes int64
	longestGap int64 // frames
	onError    func(error)

	queue  *queue
	frames atomic.Int64 // given to file
	err    atomic.Pointer[error]
	done   chan struct{} // closed at the end of the goroutine

	gap       []float64 // NaN
	refreshed int64     // frames that the header counts
}

// file is the part of wav.Writer that a Recorder needs. After an error Close still makes what was
// written readable.
type file interface {
	Write(frames []float64) error
	RefreshHeader() error
	Close() error
}

// Options say what to record. All but Replace and OnError are required.
type Options struct {
	RateHz   float64 // frames per second, a whole number of at least 1
	Channels int     // at least 1

	// Encoding is wav.Float32 or wav.Float64. A replay sees the same samples when they fit: those of
	// a sound card and of integers up to 24 bits fit float32.
	Encoding wav.Encoding

	// Replace allows to replace a file that exists. It stays as it was when Create fails.
	Replace bool

	// OnError is called once, from the goroutine of the Recorder, with the first error, after which
	// nothing more is recorded. It must not call Close. nil is not called; see Err.
	OnError func(error)
}

const (
	// refreshInterval leaves half of the second that a killed process may lose to the disk.
	refreshInterval = 500 * time.Millisecond

	// longestGapS is a day. A longer gap in one piece is taken for a clock that jumped: it would only
	// fill the disk (own choice, no source).
	longestGapS = 24 * 60 * 60

	// pieceBytes of memory are written at a time, in between which the header may be refreshed.
	pieceBytes = 256 << 10

	bytesPerSample = 8 // in memory
)

// Create makes the file at path and begins to record. The error is one line, "FILE: what is wrong:
// what to do". A file that exists is not touched unless o.Replace.
func Create(path string, o Options) (*Recorder, error) {
	w, err := create(path, o)
	if err != nil {
		return nil, err
	}
	return start(path, w, o, queueFrames(o.RateHz, o.Channels), refreshInterval), nil
}

// start begins to record into f.
func start(path string, f file, o Options, queued int64, refresh time.Duration) *Recorder {
	r := &Recorder{
		path:       path,
		rateHz:     o.RateHz,
		file:       f,
		frameBytes: int64(o.Channels * o.Encoding.Bytes()),
		longestGap: int64(longestGapS * o.RateHz),
		onError:    o.OnError,
		queue:      newQueue(o.Channels, queued),
		done:       make(chan struct{}),
		gap:        lostFrames(o.Channels),
	}
	go r.run(refresh)
	return r
}

// Counts say what became of the frames so far.
type Counts struct {
	// Frames is the length of the recording, frames without samples among them. Where the disk
	// broke, the file may hold a few more or less; the error says how many.
	Frames int64

	// Dropped is the number of captured frames that the recording lacks, because the disk was too
	// slow or the recording had ended.
	Dropped int64

	Bytes int64 // of the samples in Frames
}

// Counts returns the counts now.
func (r *Recorder) Counts() Counts {
	frames := r.frames.Load()
	return Counts{Frames: frames, Dropped: r.queue.dropped.Load(), Bytes: frames * r.frameBytes}
}

// Err is the error that ended the recording, nil as long as there is none.
func (r *Recorder) Err() error {
	if err := r.err.Load(); err != nil {
		return *err
	}
	return nil
}

// Close ends the recording, waits until the disk has all of it, and returns the first error. It
// waits for as long as a disk that is stuck. Frames that a Tee reads afterwards are dropped.
// Closing again waits, too, and returns the same.
func (r *Recorder) Close() error {
	r.queue.close(nil)
	<-r.done
	return r.Err()
}

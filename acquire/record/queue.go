package record

import (
	"sync"
	"sync/atomic"
)

// A queue takes frames and losses from the capture and gives them, in their order, to the goroutine
// that writes. Its memory is allocated once. Taking never waits for the giving side, which holds the
// lock only for a few assignments: what finds no room is dropped and becomes a loss.
//
// When something was dropped, the queue takes frames again when it is half empty: with a slow disk
// one long hole and one long stretch are worth more than holes everywhere.
type queue struct {
	channels int
	wake     chan struct{} // holds something when there may be something to take
	dropped  atomic.Int64  // captured frames that are lost

	mu       sync.Mutex
	ring     []float64
	put      int64 // frames that ever entered the ring
	taken    int64 // frames that ever left it
	losses   []loss
	dropping bool
	closed   bool
	reason   error // that it was closed for
}

// A loss is a number of lost frames in front of the frame with the number before.
type loss struct{ before, frames int64 }

// A piece is some frames to be written; lost says that they stand for lost ones.
type piece struct {
	frames []float64
	lost   bool
}

const (
	// queueS rides out a disk that does not answer for a while, as a busy one does when it is told to
	// put all it has on its platter: some seconds (common practice, no source).
	queueS = 10

	// queueBytes bounds the memory for it: ten seconds are 31 MB for 8 channels at 48,000 frames/s,
	// and at 64 channels of 51,200 frames/s five seconds must do.
	queueBytes = 128 << 20

	// leastFrames hold the largest read of a source, also at low rates.
	leastFrames = 1 << 14

	// maxLosses in the queue; with more, everything is dropped until the disk has caught up.
	maxLosses = 1 << 10
)

// queueFrames is how many frames may wait.
func queueFrames(rateHz float64, channels int) int64 {
	frames := max(leastFrames, int64(queueS*rateHz))
	return max(1, min(frames, int64(queueBytes/(bytesPerSample*channels))))
}

func newQueue(channels int, frames int64) *queue {
	return &queue{
		channels: channels,
		wake:     make(chan struct{}, 1),
		ring:     make([]float64, frames*int64(channels)),
		losses:   make([]loss, 0, maxLosses),
	}
}

// add takes captured frames, as many as there is room for.
func (q *queue) add(frames []float64) {
	q.mu.Lock()
	n := int64(len(frames) / q.channels)
	fits := min(n, q.room())
	q.enter(frames[:fits*int64(q.channels)])
	q.dropping = fits < n
	q.lose(n - fits)
	q.dropped.Add(n - fits)
	q.mu.Unlock()
	q.wakeUp()
}

// skip takes frames that the source lost.
func (q *queue) skip(frames int64) {
	q.mu.Lock()
	q.lose(frames)
	q.mu.Unlock()
	q.wakeUp()
}

// room is the number of frames that can be taken now.
func (q *queue) room() int64 {
	capacity := int64(len(q.ring) / q.channels)
	room := capacity - (q.put - q.taken)
	if q.closed || len(q.losses) == maxLosses || q.dropping && room < capacity/2 {
		return 0
	}
	return room
}

// enter copies frames, for which there is room, into the ring.
func (q *queue) enter(frames []float64) {
	at := int(q.put*int64(q.channels)) % len(q.ring)
	copy(q.ring, frames[copy(q.ring[at:], frames):])
	q.put += int64(len(frames) / q.channels)
}

// lose puts a loss behind the frames taken so far. There is room for it, since no frame is taken
// while there is none.
func (q *queue) lose(frames int64) {
	if frames <= 0 || q.closed {
		return
	}
	if n := len(q.losses); n > 0 && q.losses[n-1].before == q.put {
		q.losses[n-1].frames += frames
		return
	}
	q.losses = append(q.losses, loss{before: q.put, frames: frames})
}

func (q *queue) wakeUp() {
	select {
	case q.wake <- struct{}{}:
	default:
	}
}

// next is the next piece to write, without frames when there is none now; closed then says that there
// will be none. A piece of lost frames is part of gap, and no piece is longer. It stays in the queue
// until done.
func (q *queue) next(gap []float64) (p piece, closed bool) {
	q.mu.Lock()
	defer q.mu.Unlock()
	n := min(q.put-q.taken, int64(len(gap)/q.channels))
	if len(q.losses) > 0 {
		first := q.losses[0]
		if first.before == q.taken {
			lost := min(first.frames, int64(len(gap)/q.channels))
			return piece{gap[:lost*int64(q.channels)], true}, false
		}
		n = min(n, first.before-q.taken)
	}
	at := int(q.taken*int64(q.channels)) % len(q.ring)
	end := min(at+int(n)*q.channels, len(q.ring))
	return piece{q.ring[at:end], false}, q.closed
}

// done takes a piece out of the queue and returns the number of its frames.
func (q *queue) done(p piece) int64 {
	q.mu.Lock()
	defer q.mu.Unlock()
	n := int64(len(p.frames) / q.channels)
	if !p.lost {
		q.taken += n
		return n
	}
	if q.losses[0].frames -= n; q.losses[0].frames == 0 {
		q.losses = q.losses[:copy(q.losses, q.losses[1:])]
	}
	return n
}

// close ends the taking and returns the reason of the first close. What is in the queue can still be
// written.
func (q *queue) close(reason error) error {
	q.mu.Lock()
	defer q.mu.Unlock()
	if !q.closed {
		q.closed, q.reason = true, reason
	}
	q.wakeUp()
	return q.reason
}

// abandon counts what is still in the queue as dropped; nobody takes it any more.
func (q *queue) abandon() {
	q.mu.Lock()
	defer q.mu.Unlock()
	q.dropped.Add(q.put - q.taken)
	q.taken = q.put
	q.losses = q.losses[:0]
}

package monitor

import (
	"context"
	"errors"
	"io"

	"shakerwatch/acquire"
)

// A chunk is some frames of the channels in use, or lost ones.
type chunk struct {
	samples []float64 // channel fastest; its memory goes back to the capture
	lost    int64     // frames that were lost instead; then samples is empty
}

// capture reads the source and never waits for what comes after it, unless the source can wait.
type capture struct {
	source acquire.Source
	live   bool
	chunks chan chunk
	free   chan []float64
	spare  []float64 // what a live source is read into while no chunk is free
	broken error     // what broke the source, nil when it ended; to be read when chunks is closed
}

// The ring between capture and intake. A fiftieth of a second is little enough for levels ten
// times a second, and a second's worth rides out whatever the scheduler or the collector do. What a
// live source sends in a burst is taken in up to a bound on memory and on time.
const (
	chunksPerSecond = 50
	ringMinS        = 1
	ringMaxS        = 120
	ringMemory      = 64 << 20 // bytes
)

// ringChunks is the number of chunks of so many samples in a ring.
func ringChunks(live bool, samples int) int {
	if !live {
		return ringMinS * chunksPerSecond
	}
	return min(max(ringMemory/(bytesPerFloat*samples), ringMinS*chunksPerSecond), ringMaxS*chunksPerSecond)
}

func newCapture(c Config) *capture {
	frames := max(1, int(c.Rig.Source.RateHz/chunksPerSecond))
	channels := channelsInUse(c.Rig)
	count := ringChunks(c.Live, frames*len(channels))
	k := &capture{
		source: acquire.Select(c.Source, channels),
		live:   c.Live,
		chunks: make(chan chunk, 2*count+1), // each may follow a loss, and so may the end
		free:   make(chan []float64, count),
		spare:  make([]float64, frames*len(channels)),
	}
	for range count {
		k.free <- make([]float64, frames*len(channels))
	}
	return k
}

// run reads until the source or ctx ends, then closes chunks.
func (k *capture) run(ctx context.Context) {
	defer close(k.chunks)
	var lost int64
	for {
		buf, ok := k.take(ctx)
		if ctx.Err() != nil {
			break
		}
		n, err := k.source.Read(buf)
		if gap, ok := errors.AsType[*acquire.GapError](err); ok {
			lost += gap.Frames
		} else if err != nil {
			if err != io.EOF && ctx.Err() == nil {
				k.broken = err
			}
			break
		}
		if !ok {
			lost += int64(n)
			continue
		}
		if lost > 0 && n > 0 {
			k.chunks <- chunk{lost: lost}
			lost = 0
		}
		if n == 0 {
			k.free <- buf
			continue
		}
		k.chunks <- chunk{samples: buf[:n*k.source.Channels()]}
	}
	if lost > 0 {
		k.chunks <- chunk{lost: lost}
	}
}

// crowded tells whether more than half of the ring is taken.
func (k *capture) crowded() bool { return 2*len(k.free) < cap(k.free) }

// take gives a buffer to read into, and false when it is the spare one, whose frames are lost. It
// waits only where the source can wait, too.
func (k *capture) take(ctx context.Context) ([]float64, bool) {
	if k.live {
		select {
		case buf := <-k.free:
			return buf, true
		default:
			return k.spare, false
		}
	}
	select {
	case buf := <-k.free:
		return buf, true
	case <-ctx.Done():
		return nil, false
	}
}

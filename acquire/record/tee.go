package record

import (
	"errors"
	"fmt"

	"shakerwatch/acquire"
)

// Tee returns a source that gives exactly what source gives, and hands it to r on the way. Neither a
// slow disk nor a recording that has ended makes any difference to it, and it allocates nothing. It
// panics when source has not the rate and the channels that r records. A Recorder has one Tee.
func Tee(source acquire.Source, r *Recorder) acquire.Source {
	if source.Channels() != r.queue.channels || source.RateHz() != r.rateHz {
		panic(fmt.Sprintf("record: a source of %d channels at %v frames/s for a recording of %d at %v",
			source.Channels(), source.RateHz(), r.queue.channels, r.rateHz))
	}
	return &tee{source: source, recorder: r}
}

type tee struct {
	source   acquire.Source
	recorder *Recorder
}

func (t *tee) RateHz() float64 { return t.source.RateHz() }
func (t *tee) Channels() int   { return t.source.Channels() }

func (t *tee) Read(dst []float64) (n int, err error) {
	n, err = t.source.Read(dst)
	if n > 0 {
		t.recorder.queue.add(dst[:n*t.source.Channels()])
	}
	if err != nil {
		if gap, ok := errors.AsType[*acquire.GapError](err); ok {
			t.recorder.skip(gap.Frames)
		}
	}
	return n, err
}

// skip records that frames were lost.
func (r *Recorder) skip(frames int64) {
	if frames > r.longestGap {
		r.queue.close(fmt.Errorf("%s: recording ended: %d frames lost at once are more than a day: check the source's clock and start another recording",
			r.path, frames))
		return
	}
	r.queue.skip(frames)
}

package spectra

// A tape holds the newest frames of a stream, channel by channel, and which of them stand for lost
// ones. Frames are counted from 0 over the stream.
type tape struct {
	channels, room int
	samples        []float64 // channel by channel, room each; frame n stands at n modulo room
	lost           []bool    // by frame
	end            int64     // frames so far
}

func newTape(channels, room int) *tape {
	return &tape{
		channels: channels,
		room:     room,
		samples:  make([]float64, channels*room),
		lost:     make([]bool, room),
	}
}

// frames is how many frames samples hold. It panics when that is no whole number.
func (t *tape) frames(samples []float64) int {
	if len(samples)%t.channels != 0 {
		panic("spectra: cutter got a part of a frame")
	}
	return len(samples) / t.channels
}

// put adds frames, channel fastest and at most room of them, over the oldest ones.
func (t *tape) put(frames []float64, lost bool) {
	for len(frames) > 0 {
		at := int(t.end % int64(t.room))
		n := min(len(frames)/t.channels, t.room-at)
		for ch := range t.channels {
			row := t.samples[ch*t.room+at:][:n]
			for i := range row {
				row[i] = frames[i*t.channels+ch]
			}
		}
		flags := t.lost[at : at+n]
		for i := range flags {
			flags[i] = lost
		}
		t.end += int64(n)
		frames = frames[n*t.channels:]
	}
}

// oldest is the first frame that is held.
func (t *tape) oldest() int64 { return max(0, t.end-int64(t.room)) }

// at is one sample. Before the stream there are zeros.
func (t *tape) at(ch int, frame int64) float64 {
	if frame < 0 {
		return 0
	}
	return t.samples[ch*t.room+int(frame%int64(t.room))]
}

// isLost tells whether a frame stands for a lost one. None does before the stream.
func (t *tape) isLost(frame int64) bool {
	return frame >= 0 && t.lost[frame%int64(t.room)]
}

// copyTo copies the frames from start on into dst, channel by channel. dst has room for as many
// frames of each channel as are wanted.
func (t *tape) copyTo(dst []float64, start int64) {
	n := len(dst) / t.channels
	at := int(start % int64(t.room))
	for ch := range t.channels {
		row, to := t.samples[ch*t.room:][:t.room], dst[ch*n:][:n]
		copy(to[copy(to, row[at:]):], row)
	}
}

// lastLost is the last lost frame of from to before, -1 for none.
func (t *tape) lastLost(from, before int64) int64 {
	for n := before - 1; n >= from; n-- {
		if t.isLost(n) {
			return n
		}
	}
	return -1
}

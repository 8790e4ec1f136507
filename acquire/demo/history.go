package demo

// A history keeps the last frames of outputs.
type history struct {
	width  int
	frames []float64
	newest int // index of the newest frame
}

// newHistory keeps maxSkewFrames beside the newest, of width outputs, all 0 at first.
func newHistory(width int) history {
	return history{width: width, frames: make([]float64, (maxSkewFrames+1)*width)}
}

func (h *history) add(outputs []float64) {
	h.newest = (h.newest + 1) % (maxSkewFrames + 1)
	copy(h.frames[h.newest*h.width:], outputs)
}

// at is output i some frames before the newest, 0 to maxSkewFrames.
func (h *history) at(i, before int) float64 {
	frame := (h.newest - before + maxSkewFrames + 1) % (maxSkewFrames + 1)
	return h.frames[frame*h.width+i]
}

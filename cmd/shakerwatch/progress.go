package main

import (
	"fmt"
	"io"
	"os"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"

	"shakerwatch/cmd/internal/monitor"
)

// progress shows how far a run has come: a bar on a terminal, else a plain line every ten percent.
type progress struct {
	w      io.Writer
	bar    *progressbar.ProgressBar // nil where w is no terminal
	blocks int64                    // averaged blocks wanted; 0 is no such end
	frames int64                    // to the end of the recording's last block; 0 when nobody knows
	tenths int64                    // of the way, told so far
}

func newProgress(w io.Writer, m measurement, blocks int64) *progress {
	p := &progress{w: w, blocks: blocks, frames: lastBlockEnd(m)}
	if f, ok := w.(*os.File); ok && term.IsTerminal(int(f.Fd())) {
		end := int64(percent)
		if blocks == 0 && m.frames == 0 {
			end = -1
		}
		p.bar = progressbar.NewOptions64(end,
			progressbar.OptionSetWriter(w),
			progressbar.OptionClearOnFinish(),
			progressbar.OptionSetElapsedTime(true),
		)
	}
	return p
}

const percent = 100

// lastBlockEnd is the frame behind the last block of a recording, 0 when its length is not known.
func lastBlockEnd(m measurement) int64 {
	if m.frames == 0 {
		return 0
	}
	hop, block := int64(m.rig.Grid.Hop)*int64(m.rig.Grid.Decimation), m.rig.BlockFrames()
	if hop == 0 {
		return m.frames // where blocks lie is in the signals
	}
	return (m.frames-block)/hop*hop + block
}

// show tells the state when it has changed enough.
func (p *progress) show(c monitor.Counts) {
	part := p.part(c)
	if p.bar != nil {
		p.bar.Describe(fmt.Sprintf("%d blocks averaged, %d set aside", c.Averaged, c.SetAside))
		p.bar.Set64(int64(part * percent))
		return
	}
	if tenths := int64(part * 10); tenths > p.tenths {
		p.tenths = tenths
		fmt.Fprintf(p.w, "%d %%: %d blocks averaged, %d set aside\n", 10*tenths, c.Averaged, c.SetAside)
	}
}

// part is the share of the way, 0 to 1, by whichever end comes first; 0 when none is known.
func (p *progress) part(c monitor.Counts) float64 {
	var part float64
	if p.blocks > 0 {
		part = float64(c.Averaged) / float64(p.blocks)
	}
	if p.frames > 0 {
		part = max(part, float64(c.Frames)/float64(p.frames))
	}
	return min(part, 1)
}

// clear takes the bar away so that a line can be printed.
func (p *progress) clear() {
	if p.bar != nil {
		p.bar.Clear()
	}
}

func (p *progress) close() {
	if p.bar != nil {
		p.bar.Finish()
	}
}

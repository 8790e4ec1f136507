package main

import (
	"errors"
	"fmt"

	"shakerwatch/spectra"
)

// A size is a number of forces and of responses, and the frames in a block.
type size struct {
	Forces, Responses, Block int
}

// standardSizes are a small rig, a usual one and a large one, at two resolutions.
var standardSizes = []size{
	{2, 6, 4096}, {2, 6, 16384},
	{4, 60, 4096}, {4, 60, 16384},
	{8, 504, 4096}, {8, 504, 16384},
}

func (s size) String() string {
	return fmt.Sprintf("%d forces and %d responses, blocks of %d", s.Forces, s.Responses, s.Block)
}

func (s size) check() error {
	if s.Forces < 1 || s.Responses < 1 {
		return errors.New("--forces and --responses: one size needs both, at least 1")
	}
	if s.Block < 4 || s.Block%2 != 0 {
		return fmt.Errorf("--block %d: half a block must be whole: choose an even number from 4 on", s.Block)
	}
	return nil
}

func (s size) channels() int { return s.Forces + s.Responses }

func (s size) hop() int { return s.Block / 2 }

// lines are those from 0 Hz to the band's end at rate/2.56.
func (s size) lines() int { return s.Block*100/256 + 1 }

func (s size) shape() spectra.Shape {
	return spectra.Shape{Lines: s.lines(), Forces: s.Forces, Responses: s.Responses}
}

const (
	floatBytes = 8
	rateHz     = 48_000 // of the made-up recording; scales densities and the real-time factor

	maxRecording = 512 << 20 // bytes
	maxBlocks    = 64        // in a recording
)

// blocks is how many blocks the recording has: what the bounds leave room for.
func (s size) blocks() int {
	return max(1, min(maxRecording/(floatBytes*s.hop()*s.channels())-1, maxBlocks))
}

// frames are those of a recording of some blocks.
func (s size) frames(blocks int) int { return (blocks + 1) * s.hop() }

// samples is the number of channel samples in a recording of some blocks, each counted once.
func (s size) samples(blocks int) float64 {
	return float64(blocks) * float64(s.hop()) * float64(s.channels())
}

// together is how many blocks a contestant may hold: as many as the program's intake does.
func (s size) together() int {
	const most, memory = 16, 256 << 20 // as in cmd/internal/monitor
	perBlock := floatBytes * s.channels() * (s.Block + 2*s.lines())
	return max(1, min(memory/perBlock, most))
}

package estimate

import (
	"fmt"
	"math"
	"sort"

	"shakerwatch/acquire/rig"
	"shakerwatch/spectra"
)

// A Memory says what the blocks of exponential averaging are worth together. A block of age j weighs
// λ^j, λ = 1 - 1/Blocks, so there is a number of independent averages that no number of blocks exceeds.
// It is read-only once made.
type Memory struct {
	Blocks int
	lambda float64
	rho2   []float64 // of blocks 1, 2, ... hops apart, while they overlap
}

// NewMemory is the memory of blocks weighted by window's values, hop samples apart; a hop of 0 is for
// blocks that never overlap. It panics unless blocks >= 2.
func NewMemory(blocks int, window []float64, hop int) *Memory {
	if blocks < 2 {
		panic("estimate: a memory of less than two blocks")
	}
	m := &Memory{Blocks: blocks, lambda: 1 - 1/float64(blocks)}
	for lag := hop; hop > 0 && lag < len(window); lag += hop {
		rho := spectra.OverlapCorrelation(window, lag)
		m.rho2 = append(m.rho2, rho*rho)
	}
	return m
}

// memoryOf is the memory of a rig's averaging, nil when it weighs all blocks alike.
func memoryOf(r *rig.Rig) *Memory {
	if r.Analysis.Memory == 0 {
		return nil
	}
	return NewMemory(r.Analysis.Memory, spectra.Window(r.Analysis.Window).Values(r.Grid.Block), r.Grid.Hop)
}

// Averages is n_e after the given number of blocks without one missing, see spectra.Effective:
// (Σ w)² / Σ_ab w_a w_b rho².
func (m *Memory) Averages(blocks int) float64 {
	if blocks < 1 {
		return 0
	}
	// Sums of λ^j and λ^2j over the blocks that are there.
	sum := (1 - math.Pow(m.lambda, float64(blocks))) / (1 - m.lambda)
	squares := func(n int) float64 {
		return (1 - math.Pow(m.lambda, float64(2*n))) / (1 - m.lambda*m.lambda)
	}
	total := squares(blocks)
	for j, rho2 := range m.rho2 {
		if lag := j + 1; lag < blocks {
			total += 2 * rho2 * math.Pow(m.lambda, float64(lag)) * squares(blocks-lag)
		}
	}
	return sum * sum / total
}

// Limit is the n_e that no number of blocks exceeds,
// Blocks² (1 - λ²) / (1 + 2 Σ_j λ^j rho_j²).
func (m *Memory) Limit() float64 {
	overlap := 1.0
	for j, rho2 := range m.rho2 {
		overlap += 2 * math.Pow(m.lambda, float64(j+1)) * rho2
	}
	size := float64(m.Blocks)
	return size * size * (1 - m.lambda*m.lambda) / overlap
}

// fullMemories is after how many memories of blocks n_e has come within 1e-12 of its limit.
const fullMemories = 30

// BlocksFor is the smallest number of blocks that are worth the given number of independent averages,
// NaN when no number is.
func (m *Memory) BlocksFor(averages float64) float64 {
	full := fullMemories * m.Blocks
	if !(averages <= m.Averages(full)) {
		return math.NaN()
	}
	return float64(sort.Search(full, func(blocks int) bool { return m.Averages(blocks) >= averages }))
}

// sentence says that a target needs more than the memory is worth.
func (m *Memory) sentence(averages float64) string {
	// The limit grows with the memory, by nearly 2 Blocks over the overlap.
	enough := math.Ceil(float64(m.Blocks) * averages / m.Limit())
	return fmt.Sprintf("the memory of %d blocks can't reach it: it is worth %.3g independent averages at most and the target needs about %.3g: "+
		"a memory of about %.0f blocks would do", m.Blocks, m.Limit(), averages, enough)
}

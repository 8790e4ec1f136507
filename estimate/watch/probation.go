package watch

import "shakerwatch/acquire/rig"

// Probation keeps the list of blocks that were judged but not yet averaged, because a later
// judgement may still spoil them. It holds numbers only; whoever holds the blocks follows its
// decisions. Every block that enters leaves once, in order.
type Probation struct {
	delay   int // judgements that a block waits for
	carryOn bool
	waiting []waiting
}

type waiting struct {
	block int64
	kind  Kind // why it will be set aside, as far as is known
	held  bool // a holding fault stood while it waited
	after int  // blocks compared with the average since
}

// A Decision says where a block goes.
type Decision struct {
	Block   int64
	Average bool
	Kind    Kind // why it is set aside
}

// minProbation is how many later blocks are judged before a block is averaged. A fault that begins near a
// block's end is beyond doubt only in the next one or two, and is named with the third; on simulated
// rigs waiting for one or two let contaminated blocks pass.
const minProbation = 3

// Delay is how many later blocks are judged before a block of a rig is averaged.
func Delay(r *rig.Rig) int { return max(minProbation, overlapping(r.Grid)) }

// NewProbation makes the list for a rig.
func NewProbation(r *rig.Rig) *Probation {
	return &Probation{delay: Delay(r), carryOn: r.OnFault == carryOn}
}

const carryOn = "carry-on" // the rig file's word

// overlapping is how many blocks hold one sample at most: ceil(block/hop), 1 when blocks never
// overlap.
func overlapping(g rig.Grid) int {
	if g.Hop <= 0 {
		return 1
	}
	return (g.Block + g.Hop - 1) / g.Hop
}

// Judged enters the block that j is about and appends the decisions that are due, oldest first. j
// must be that of the next block, transformed or not. A block that the caller keeps out for reasons of its own
// has a judgement with its Block and Kind, and From beyond it.
func (p *Probation) Judged(dst []Decision, j Judgement) []Decision {
	if p.carryOn {
		average := j.Kind != Overrange && j.Kind != Gap
		d := Decision{Block: j.Block, Average: average}
		if !average {
			d.Kind = j.Kind
		}
		return append(dst, d)
	}
	for i := range p.waiting {
		b := &p.waiting[i]
		if j.Compared { // a block that was lost or paused says nothing of those before it
			b.after++
		}
		b.held = b.held || j.Holds
		if b.block >= j.From && b.kind == "" {
			b.kind = j.Kind
		}
	}
	p.waiting = append(p.waiting, waiting{block: j.Block, kind: j.Kind, held: j.Holds})
	// A judgement that the watch did not make, as of a block while paused, says nothing of its being armed.
	atOnce := !j.Armed && j.Normal()
	due := 0
	for due < len(p.waiting) && (atOnce || p.waiting[due].after >= p.delay) {
		dst = append(dst, p.waiting[due].decision())
		due++
	}
	p.waiting = p.waiting[:copy(p.waiting, p.waiting[due:])]
	return dst
}

// End appends the decisions on all blocks that still wait, when no more will come.
func (p *Probation) End(dst []Decision) []Decision {
	for _, b := range p.waiting {
		dst = append(dst, b.decision())
	}
	p.waiting = p.waiting[:0]
	return dst
}

// heldBack is the reason given for a block that was normal by itself while a fault stood.
const heldBack Kind = "held"

func (b waiting) decision() Decision {
	kind := b.kind
	if kind == "" && b.held {
		kind = heldBack
	}
	return Decision{Block: b.block, Average: kind == "", Kind: kind}
}

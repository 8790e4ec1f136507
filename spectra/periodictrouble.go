package spectra

import "fmt"

// maxDivisor is the largest part of the period with which the forces are tried to repeat as well.
const maxDivisor = 5

// periodicTexts are the sentences of Trouble, written once.
type periodicTexts struct {
	unlike, silent, short, same, weak string
	within                            [maxDivisor + 1]string
}

func newPeriodicTexts(period, settle, keep int) (t periodicTexts) {
	t.unlike = fmt.Sprintf("The forces do not repeat every %d frames, the declared period: check the period, that generator and this input share a clock, and that the drive is on.", period)
	t.silent = "The forces are silent: switch the drive on."
	t.short = fmt.Sprintf("Random blocks change before %d + %d periods are over and are not used: let each repeat more often, or settle for fewer periods.", settle, keep)
	t.same = "The forces repeat, but no new random block begins: see that the generator goes on to a new one."
	t.weak = "The forces are more than 30 dB weaker than before, so their blocks are not used: switch the drive on. If the new level is meant, the third random block counts again."
	for d := 2; d <= maxDivisor; d++ {
		t.within[d] = fmt.Sprintf("The forces repeat %d times within %d frames, the declared period: check the period; only every %d. line is driven.", d, period, d)
	}
	return t
}

// Trouble says what keeps blocks from being found, or spoils them, and what to do. It is empty when
// nothing does.
//
// That the forces do not repeat is said after settle + keep + 1 periods with force in which they
// did not: however the stream began, every random block repeats within that time.
func (c *PeriodicCutter) Trouble() string {
	span := c.settle + c.keep
	switch {
	case c.still >= (span+1)*c.period:
		return c.texts.silent
	case c.unlike >= (span+1)*c.period:
		return c.texts.unlike
	case c.weak > 0:
		return c.texts.weak
	case c.short >= shortBlocks:
		return c.texts.short
	case c.repeated && !c.full && c.tape.end-c.change > manyBlocks*span*c.period:
		return c.texts.same
	case c.divisor > 0:
		return c.texts.within[c.divisor]
	}
	return ""
}

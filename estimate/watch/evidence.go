package watch

// Evidence is what is known of one block when it is judged.
type Evidence struct {
	Block   int64
	StartS  float64 // source seconds at its first frame
	EndS    float64 // source seconds at its end
	Lost    Lost    // the first lost frames that the block touches
	AtLimit []bool  // by channel, forces first: reached its limit; nil when none did

	// Lines is the block's transform, (line, channel), forces first. It is nil when the block was not
	// transformed, and is read only while Judge runs.
	Lines []complex128
}

// Lost is a stretch of lost frames.
type Lost struct {
	StartS float64 // source seconds at its first lost frame
	Frames int64   // 0 when nothing was lost
}

// A Judgement says what is to become of a block, and of those before it that still wait.
type Judgement struct {
	Block int64

	// Kind is why the block is not to be averaged, empty when it is normal. An abnormal block whose
	// cause is not known yet has the kind that it looks like.
	Kind Kind

	// From is the first block that this judgement spoils: Block itself when it is all, and beyond it
	// for a normal one.
	From int64

	Armed    bool // the watch knows the average well enough to judge by it
	Compared bool // the block was compared with the average
	Holds    bool // a fault stands with which nothing is averaged
}

// Normal tells whether nothing speaks against the block itself.
func (j Judgement) Normal() bool { return j.Kind == "" }

package watch

// A streak is what goes on at the moment: an episode that begins with an abnormal block and ends when
// enough normal ones followed, and in it the abnormal blocks in a row.
type streak struct {
	length int     // blocks in a row that no standing fault explains
	first  int64   // of these
	firstS float64 // when the first of these became abnormal, as well as its block tells

	open   bool // an episode is under way
	named  bool // a cause was named in it, or stood
	begin  int64
	beginS float64
	from   int64 // first block that the episode spoils
	last   int64 // abnormal one
	calm   int   // normal blocks since
	seen   []int // channels that were abnormal
	ending bool  // the episode ended with this block
}

// calmBlocks is how many normal blocks end an episode, or as many as overlap: two knocks in a row are one
// disturbance.
const calmBlocks = 2

// enter takes a block up, since being the first one that an abnormal one takes in and at its beginning,
// explained whether all that is abnormal is what stands already. It tells whether a normal block is spoilt by
// an abnormal one just before.
func (s *streak) enter(e Evidence, since int64, at float64, abnormal, explained bool, l *layout) (spoilt bool) {
	s.ending = false
	if abnormal {
		if !s.open {
			*s = streak{open: true, begin: since, beginS: at, from: since - l.reach(), seen: s.seen[:0]}
		}
		s.length++
		if s.length == 1 {
			s.first, s.firstS = since, at
			s.length = l.spanned(e.Block, since)
		}
		if explained {
			s.length = 0
		}
		s.last, s.calm = e.Block, 0
		return false
	}
	s.length = 0
	if !s.open {
		return false
	}
	s.calm++
	if s.calm >= max(calmBlocks, l.overlap) {
		s.open, s.ending = false, true
	}
	return e.Block-s.last < int64(l.overlap)
}

// spanned is how many blocks an abnormal one shows to be abnormal, itself included; no more than hold a knock.
func (l *layout) spanned(block, since int64) int {
	return int(min(block-since+1, int64(l.overlap)))
}

// faltered is the detail of a disturbance in which nothing but the level of forces was abnormal.
const faltered = "faltered"

// disturbed raises a disturbance when an episode ended and nothing was named.
func (w *Watch) disturbed(events []Event, e Evidence) []Event {
	s := &w.streak
	if !s.ending || s.named || len(s.seen) == 0 {
		return events
	}
	f := finding{kind: Disturbance, channels: s.seen}
	if n := len(s.seen); n > 0 && s.seen[n-1] < w.layout.q {
		f.detail = faltered
	}
	u := subject{kind: kindOf(Disturbance), since: s.begin, sinceS: s.beginS, finding: f}
	return append(events, w.event(&u, e, Raised, u.kind.raised(w.said(&u, e))))
}

// timeOf is when what a block is the first to hold began: after the end of the block before. Blocks are
// taken to lie evenly.
func (w *Watch) timeOf(block int64, e Evidence) float64 {
	hopS := 0.0
	if e.Block > w.first {
		hopS = (e.StartS - w.firstS) / float64(e.Block-w.first)
	}
	at := e.EndS - hopS*float64(e.Block-block+1)
	return max(at, w.firstS)
}

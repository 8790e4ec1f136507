package estimate

import "fmt"

// A State is the one word for how the measurement stands.
type State string

// The states, in the order in which a good run goes through them.
const (
	Settling  State = "settling"  // too few averages to judge anything
	Averaging State = "averaging" // sound, more needed
	Enough    State = "enough"    // the target is met
)

// A Verdict is the state and why.
type Verdict struct {
	State   State    `json:"state"`
	Reasons []string `json:"reasons"` // sentences, the most important one first; never nil
}

// SettlingAverages is the number of averages from which a measurement with q forces is judged.
// Common practice, no source: three averages a force, and not fewer than eight.
func SettlingAverages(q int) int { return max(8, 3*q) }

// Judge gives the verdict on e. p is its progress towards t, standing are sentences about what
// stands against the measurement at the moment, and frf names frequency response n of (p,q).
func Judge(e *Estimates, p *Progress, t Target, standing []string, frf func(n int) string) Verdict {
	v := Verdict{State: Averaging, Reasons: append([]string{}, standing...)}
	need := SettlingAverages(e.Forces)
	switch {
	case e.Averages < need:
		v.State = Settling
		v.Reasons = append(v.Reasons, fmt.Sprintf("%d of the %d averages from which a result is judged", e.Averages, need))
	case p.Met:
		v.State = Enough
	default:
		v.Reasons = append(v.Reasons, worstSentence(p, t, frf))
	}
	return v
}

func worstSentence(p *Progress, t Target, frf func(n int) string) string {
	err := p.Errors[p.Worst]
	if err != err {
		return fmt.Sprintf("%s: random error unknown on more than %.3g %% of its lines of interest, target %.3g %%",
			frf(p.Worst), 100*(1-t.Share), 100*t.RandomError)
	}
	return fmt.Sprintf("%s: random error %.3g %% on %.3g %% of its lines of interest, target %.3g %%",
		frf(p.Worst), 100*err, 100*t.Share, 100*t.RandomError)
}

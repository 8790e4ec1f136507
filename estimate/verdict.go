package estimate

import (
	"fmt"

	"shakerwatch/acquire/rig"
)

// A State is the one word for how the measurement stands.
type State string

// The states, in the order in which a good run goes through them.
const (
	Settling  State = "settling"  // too few averages to judge anything
	Averaging State = "averaging" // sound, more needed
	Enough    State = "enough"    // the target is met

	StopAndLook State = "stop-and-look" // a fault stands
)

// A Verdict is the state and why.
type Verdict struct {
	State   State    `json:"state"`
	Reasons []string `json:"reasons"` // sentences, the most important one first; never nil
}

// SettlingAverages is the number of averages from which a measurement with q forces is judged.
// Common practice, no source: three averages a force, and not fewer than eight.
func SettlingAverages(q int) int { return max(8, 3*q) }

// SettlingOf is that number for a rig: with periodic excitation, whose averages hold no noise to speak of, four more
// than forces.
func SettlingOf(r *rig.Rig) int {
	if r.Analysis.Excitation == "periodic" {
		return len(r.Forces) + 4
	}
	return SettlingAverages(len(r.Forces))
}

// Findings are what a verdict goes by besides the progress. What is nil was not looked for.
type Findings struct {
	Fault      bool        // one stands
	Standing   []string    // sentences about what stands against the measurement at the moment
	Drift      *Drift      // of the same estimates, as is Resonances
	Resonances *Resonances // for leakage
}

// Judge gives the verdict on e. p is its progress towards t, found is what else was found, nil for nothing, and
// frf names frequency response n of (p,q).
//
// Findings that more averaging does not mend, drift and leakage, are reasons as soon as a result is judged; they
// do not keep it from being enough.
func Judge(e *Estimates, p *Progress, t Target, found *Findings, frf func(n int) string) Verdict {
	if found == nil {
		found = &Findings{}
	}
	v := Verdict{State: Averaging, Reasons: append([]string{}, found.Standing...)}
	if found.Fault {
		v.State = StopAndLook
		return v // how far the averaging is, is beside the point until somebody has looked
	}
	need := t.Settling
	if need == 0 {
		need = SettlingAverages(e.Forces)
	}
	switch {
	case e.Averages < need:
		v.State = Settling
		v.Reasons = append(v.Reasons, fmt.Sprintf("%d of the %d averages from which a result is judged", e.Averages, need))
		return v
	case p.Met:
		v.State = Enough
	default:
		v.Reasons = append(v.Reasons, worstSentence(p, t, frf))
		if p.BeyondMemory > 0 {
			v.Reasons = append(v.Reasons, t.Memory.sentence(p.BeyondMemory))
		}
	}
	if found.Drift != nil {
		if n, beyond := found.Drift.Beyond(t); beyond {
			v.Reasons = append(v.Reasons, found.Drift.sentence(n, frf(n)))
		}
	}
	if found.Resonances != nil {
		if leakage, there := found.Resonances.Leakage(); there {
			v.Reasons = append(v.Reasons, leakage.String())
		}
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

package demo

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// A Fault is something that breaks on the simulated rig. Times are source seconds: 0 is the first
// frame that is read, and lost frames count. It acts at whole frames.
type Fault struct {
	Kind   string   // one of FaultKinds
	FromS  float64  // onset; one that has passed when the fault is set is the next frame
	ToS    float64  // end; 0 is never
	Target []string // names, as the kind wants
	Amount float64  // in the kind's unit; 0 is the usual amount
}

// ParseFault reads a fault from text:
//
//	kind@from-to:target=amount
//
// as in detach@60s-90s:S2, knock@75s:14z=2 or tied@1min:S1,S2. Times are decimal numbers with the unit
// s, ms or min; without one they are seconds. An end, a target of a kind that has none, and an amount can be left
// out. Whether the target exists is known to SetFaults only.
func ParseFault(text string) (Fault, error) {
	f, err := parseFault(text)
	if err == nil {
		err = f.check()
	}
	if err != nil {
		return Fault{}, fmt.Errorf("fault %q: %w", text, err)
	}
	return f, nil
}

func parseFault(text string) (f Fault, err error) {
	kind, rest, ok := strings.Cut(text, "@")
	if !ok {
		return f, fmt.Errorf("no onset: write kind@from-to:target=amount, such as detach@60s-90s:S2")
	}
	f.Kind = kind
	if head, amount, ok := cutLast(rest, "="); ok {
		rest = head
		if f.Amount, err = strconv.ParseFloat(amount, 64); err != nil || math.IsNaN(f.Amount) || math.IsInf(f.Amount, 0) {
			return f, fmt.Errorf("amount %q is no number: give one, or leave out = for the usual amount", amount)
		}
		if f.Amount == 0 {
			return f, fmt.Errorf("amount 0 is no fault: leave out = for the usual amount")
		}
	}
	times, names, ok := strings.Cut(rest, ":")
	if ok {
		f.Target = strings.Split(names, ",")
	}
	from, to, ok := strings.Cut(times, "-")
	if f.FromS, err = seconds(from, "onset"); err != nil {
		return f, err
	}
	if ok {
		if f.ToS, err = seconds(to, "end"); err != nil {
			return f, err
		}
		if f.ToS <= f.FromS {
			return f, fmt.Errorf("end %q is not behind onset %q: give a later end, or none", to, from)
		}
	}
	return f, nil
}

// cutLast cuts s around the last sep.
func cutLast(s, sep string) (before, after string, found bool) {
	if i := strings.LastIndex(s, sep); i >= 0 {
		return s[:i], s[i+len(sep):], true
	}
	return s, "", false
}

// maxTimeS is beyond any run and keeps frame counts in their type.
const maxTimeS = 1e8

// seconds reads a time.
func seconds(text, what string) (float64, error) {
	digits := strings.TrimRight(text, "abcdefghijklmnopqrstuvwxyz")
	factor, ok := map[string]float64{"": 1, "s": 1, "ms": 1e-3, "min": 60}[text[len(digits):]]
	v, err := strconv.ParseFloat(digits, 64)
	if !ok || err != nil || strings.Trim(digits, "0123456789.") != "" {
		return 0, fmt.Errorf("%s %q is no time: give one such as 60s, 500ms or 1.5min", what, text)
	}
	if v *= factor; v > maxTimeS {
		return 0, fmt.Errorf("%s %q is too late: give at most %gs", what, text, float64(maxTimeS))
	}
	return v, nil
}

// String is the fault as ParseFault reads it.
func (f Fault) String() string {
	number := func(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }
	var b strings.Builder
	b.WriteString(f.Kind + "@" + number(f.FromS) + "s")
	if f.ToS != 0 {
		b.WriteString("-" + number(f.ToS) + "s")
	}
	if len(f.Target) > 0 {
		b.WriteString(":" + strings.Join(f.Target, ","))
	}
	if f.Amount != 0 {
		b.WriteString("=" + strconv.FormatFloat(f.Amount, 'g', -1, 64))
	}
	return b.String()
}

// check reports what is wrong whatever the rig.
func (f *Fault) check() error {
	k, ok := kindNamed(f.Kind)
	if !ok {
		return fmt.Errorf("there is no kind %q: choose %s", f.Kind, kindNames())
	}
	if !(f.FromS >= 0 && f.FromS <= maxTimeS) || f.ToS != 0 && !(f.ToS > f.FromS && f.ToS <= maxTimeS) {
		return fmt.Errorf("from %g s to %g s: give an onset from 0 and an end behind it, or 0 for none", f.FromS, f.ToS)
	}
	if k.once && f.ToS != 0 {
		return fmt.Errorf("a %s has no end: leave it out", k.name)
	}
	least, most := k.target.bounds()
	if n := len(f.Target); n < least || n > most || slices.Contains(f.Target, "") {
		return fmt.Errorf("target %q: give %s behind the colon", strings.Join(f.Target, ","), k.target.words())
	}
	return f.checkAmount(k)
}

func (f *Fault) checkAmount(k *faultKind) error {
	switch {
	case f.Amount == 0:
		return nil
	case k.unit == "":
		return fmt.Errorf("amount %g: %s has none: leave it out", f.Amount, k.name)
	case !(f.Amount >= k.lo && f.Amount <= k.hi):
		return fmt.Errorf("amount %g: give %g to %g %s", f.Amount, k.lo, k.hi, k.unit)
	case k.name == "lost" && f.ToS != 0:
		return fmt.Errorf("amount %g frames with an end: keep one of them", f.Amount)
	}
	return nil
}

// orUsual is the amount or the kind's usual one.
func (f *Fault) orUsual() float64 {
	if f.Amount != 0 {
		return f.Amount
	}
	k, _ := kindNamed(f.Kind)
	return k.usual
}

func kindNames() string {
	var names []string
	for _, k := range faultKinds {
		names = append(names, k.name)
	}
	return strings.Join(names[:len(names)-1], ", ") + " or " + names[len(names)-1]
}

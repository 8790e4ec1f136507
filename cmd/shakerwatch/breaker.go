package main

import (
	"fmt"
	"slices"

	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
	"shakerwatch/web"
)

// A breaker breaks and mends the simulated rig as pages ask. It serves one goroutine at a time.
type breaker struct {
	rig    *rig.Rig
	source *demo.Source
	faults []demo.Fault // that are set
}

// breakable are the faults that a page offers: those that a newcomer learns most from.
var breakable = []struct {
	kind, name, expect string
	of                 func(r *rig.Rig) []string // targets
}{
	{"detach", "stinger off", "force-lost within seconds: the band stops, averaging waits, and nothing of it gets into the average", forceNames},
	{"pad-off", "load cell off the structure", "force-not-reaching: the force is still there, the structure does not follow", forceNames},
	{"drive-off", "drive off", "force-lost, or no-drive when all are off", forceNames},
	{"loose", "sensor loose", "response-suspect names the sensor; its coherence falls", responseNames},
	{"cut", "cable broken", "response-suspect, then look at the cable", responseNames},
	{"gain", "gain wrong", "response-suspect, as its average was right before", responseNames},
	{"reverse", "sensor reversed", "response-suspect; from the start of an average on polarity-suspect at a driving point", responseNames},
	{"tied", "drives correlated", "forces-correlated in the plot of independence; averaging goes on", pairOfForces},
	{"mode-shift", "structure changed", "structure-changed: several responses leave their average together", everyMode},
	{"knock", "knock", "disturbance: its blocks are set aside, nothing is to be done", drivenPoints},
}

func forceNames(r *rig.Rig) []string    { return channelNames(r.Forces) }
func responseNames(r *rig.Rig) []string { return channelNames(r.Responses) }
func drivenPoints(r *rig.Rig) []string  { return channelNames(r.Responses) }
func everyMode(*rig.Rig) []string       { return nil }

func pairOfForces(r *rig.Rig) []string {
	if len(r.Forces) < 2 {
		return []string{}
	}
	return []string{r.Forces[0].Name + "," + r.Forces[1].Name}
}

func channelNames(channels []rig.Channel) []string {
	var names []string
	for _, c := range channels {
		names = append(names, c.Name)
	}
	return names
}

// offers are the faults for the page; nil without a simulated rig.
func (b *breaker) offers() []web.Fault {
	if b == nil {
		return nil
	}
	var list []web.Fault
	for _, f := range breakable {
		targets := f.of(b.rig)
		if targets != nil && len(targets) == 0 {
			continue
		}
		list = append(list, web.Fault{
			Code: f.kind, Name: f.name, Targets: targets, Once: f.kind == "knock", Expect: f.expect,
		})
	}
	return list
}

// obey does what a page asks and says what was done.
func (b *breaker) obey(c web.Command) string {
	target := c.Target
	if c.Fault == "mode-shift" {
		target = "all"
	}
	nowS := float64(b.source.Frames()) / b.rig.Source.RateHz
	f, err := demo.ParseFault(fmt.Sprintf("%s@%.3fs:%s", c.Fault, nowS, target))
	if err != nil {
		return "Simulated rig: " + err.Error()
	}
	same := func(other demo.Fault) bool { return other.Kind == f.Kind && slices.Equal(other.Target, f.Target) }
	faults, what := slices.DeleteFunc(slices.Clone(b.faults), same), "mended"
	if c.Kind == web.Break {
		faults, what = append(faults, f), "broken"
	}
	if err := b.source.SetFaults(faults...); err != nil {
		return "Simulated rig: " + err.Error()
	}
	b.faults = faults
	return fmt.Sprintf("Simulated rig %s: %s %s", what, c.Fault, target)
}

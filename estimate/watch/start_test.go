package watch

import (
	"fmt"
	"slices"
	"strings"
	"testing"
)

// A wrong is something that is wrong with a simulated rig from the first block on.
type wrong struct {
	name    string
	want    []string // kind, channels, cause of all that is raised
	also    string   // may be raised too
	atLeast int      // forces
	do      func(s *simulated, c chosen)
}

var wrongs = []wrong{
	{name: "nothing", do: func(*simulated, chosen) {}},
	{name: "gain 1.25", want: []string{"reciprocity-off gain"}, atLeast: 2, do: func(s *simulated, c chosen) { s.gain[s.q+c.force] *= 1.25 }},
	{name: "force gain 0.5", want: []string{"reciprocity-off gain"}, atLeast: 2, do: func(s *simulated, c chosen) { s.gain[c.force] *= 0.5 }},
	{name: "sensor reversed", want: []string{"polarity-suspect "}, do: func(s *simulated, c chosen) { s.gain[s.q+c.force] *= -1 }},
	{name: "cell reversed", want: []string{"polarity-suspect "}, do: func(s *simulated, c chosen) { s.gain[c.force] *= -1 }},
	{name: "skew of a sample", want: []string{"reciprocity-off skew"}, also: "polarity-suspect ", atLeast: 2, do: func(s *simulated, c chosen) { s.delay[s.q+c.force] = 1 }},
	{name: "tilted", want: []string{"reciprocity-off local"}, atLeast: 2, do: func(s *simulated, c chosen) {
		s.lateral[s.q+c.force], s.gain[s.q+c.force] = 0.6, 0.9*s.gain[s.q+c.force]
	}},
	{name: "pad off", want: []string{"force-not-reaching "}, atLeast: 2, do: func(s *simulated, c chosen) { s.off[c.force], s.tip = padOff, 0.2 }},
	{name: "stinger off", want: []string{"force-lost "}, atLeast: 2, do: func(s *simulated, c chosen) { s.off[c.force] = shakerOff }},
	{name: "not driven", want: []string{"force-lost "}, atLeast: 2, do: func(s *simulated, c chosen) { s.drive[c.force] = 0 }},
	{name: "no drive", want: []string{"no-drive "}, atLeast: 2, do: func(s *simulated, c chosen) { clear(s.drive) }},
	{name: "one cable on two forces", want: []string{"twin-channels "}, atLeast: 2, do: func(s *simulated, _ chosen) { s.copyOf[1] = 0 }},
	{name: "one cable on two responses", want: []string{"twin-channels "}, do: func(s *simulated, _ chosen) { s.copyOf[s.q+3] = s.q + 2 }},
	{name: "constant", want: []string{"dead-channel "}, do: func(s *simulated, _ chosen) { s.dead[s.q+2] = true }},
}

func TestFromTheStart(t *testing.T) {
	for _, q := range []int{1, 2, 3} {
		for _, x := range wrongs {
			if !strings.Contains(x.name, *onlyFault) || q < x.atLeast {
				continue
			}
			t.Run(fmt.Sprintf("%s, %d forces", x.name, q), func(t *testing.T) {
				right := 0
				for seed := range *manySeeds {
					s := newSimulated(uint64(*firstSeed+seed), simOptions{q: q, p: 6})
					c := chosen{force: s.rng.IntN(q)}
					x.do(s, c)
					r := newRun(s, nil)
					r.blocks(32)
					r.end()
					var got []string
					for _, e := range r.events {
						if said := fmt.Sprintf("%s %s", e.Kind, e.Cause); e.Kind != ForcesCorrelated && said != x.also && !slices.Contains(got, said) {
							got = append(got, said)
						}
					}
					if slices.Equal(got, x.want) {
						right++
						continue
					}
					t.Logf("seed %d: %q\n%s", *firstSeed+seed, got, strings.Join(r.story(), "\n"))
				}
				t.Logf("of %d: right %d", *manySeeds, right)
				if right < *manySeeds {
					t.Fail()
				}
			})
		}
	}
}

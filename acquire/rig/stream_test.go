package rig

import (
	"math"
	"testing"
)

func TestCheckStream(t *testing.T) {
	const (
		rate = "rig.toml:4: [source]: rate 48000, but run.wav has 44100 frames per second: make them equal"
		seat = `rig.toml:22: response "seat": channel 3 of 2 in run.wav: choose 1 to 2`
		end  = `rig.toml:28: response "end": channel 4 of 2 in run.wav: choose 1 to 2`
	)
	r := must(t, baseText)
	for _, c := range []struct {
		name     string
		rateHz   float64
		channels int
		want     string
	}{
		{"fits", 48000, 8, ""},
		{"just the channels used", 48000, 4, ""},
		{"another rate", 44100, 4, rate},
		{"too few channels", 48000, 2, seat + "\n" + end},
		{"all wrong", 44100, 2, rate + "\n" + seat + "\n" + end},
		{"unknown rate", math.NaN(), 8, "rig.toml:4: [source]: rate 48000, but run.wav has NaN frames per second: make them equal"},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := ""
			if err := r.CheckStream("run.wav", c.rateHz, c.channels); err != nil {
				got = err.Error()
			}
			if got != c.want {
				t.Errorf("got\n%s\nwant\n%s", got, c.want)
			}
		})
	}
}

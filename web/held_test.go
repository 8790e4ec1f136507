package web

import (
	"math"
	"testing"
)

func TestHeldPeaks(t *testing.T) {
	nan := math.NaN()
	p := newHeld(3)
	for _, step := range []struct {
		name    string
		do      func()
		want    string
		message bool // a new one
	}{
		{"the first levels", func() { p.take([]float64{0.5, nan, 0}) }, "[0.5,null,0]", true},
		{"lower ones", func() { p.take([]float64{0.4, nan, 0}) }, "[0.5,null,0]", false},
		{"higher ones", func() { p.take([]float64{0.6, 0.1, 0}) }, "[0.6,0.1,0]", true},
		{"an unknown one", func() { p.take([]float64{nan, nan, nan}) }, "[0.6,0.1,0]", false},
		{"one is reset", func() { p.reset(0) }, "[null,0.1,0]", true},
		{"and taken anew", func() { p.take([]float64{0.2, 0.05, 0}) }, "[0.2,0.1,0]", true},
		{"all are reset", func() { p.reset(-1) }, "[null,null,null]", true},
	} {
		before := p.message.number
		step.do()
		if got, want := string(p.message.text), `{"type":"held","peak":`+step.want+`}`; got != want {
			t.Errorf("%s: %s, want %s", step.name, got, want)
		}
		if (p.message.number != before) != step.message {
			t.Errorf("%s: message %d after %d", step.name, p.message.number, before)
		}
	}
}

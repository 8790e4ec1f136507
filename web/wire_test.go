package web

import (
	"encoding/json"
	"fmt"
	"sync"
	"testing"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
)

// A wireCurves is the part of a refresh that has the curves, read as a page reads it.
type wireCurves map[string]json.RawMessage

// steps are those of all curves that there are, by their names in the messages.
var steps = sync.OnceValue(func() map[string]float64 {
	text := "[source]\nrate = 1000\n[analysis]\nmax_frequency = 100\nexcitation = \"periodic\"\n[periodic]\nperiod = 1000\n"
	for ch := 1; ch <= 13; ch++ {
		kind := "response"
		if ch == 1 {
			kind = "force"
		}
		text += fmt.Sprintf("[[%s]]\nchannel = %d\nname = \"C%d\"\npoint = \"%d\"\naxis = \"+x\"\nsensitivity = 1\n", kind, ch, ch, ch)
	}
	r, err := rig.Parse("steps.toml", []byte(text))
	if err != nil {
		panic(err)
	}
	list := map[string]float64{}
	for _, p := range plots(r, estimate.NewTarget(r), 0.9) {
		for _, c := range p.Curves {
			list[c.From] = c.Step
		}
	}
	return list
})

// points is how many there are.
func (m readRefresh) points() int {
	n := 0
	for _, run := range m.View.Runs {
		n += run[0]
	}
	return n
}

func (m readRefresh) curve(t *testing.T, name string) []*float64 {
	t.Helper()
	return m.values(t, name, m.Curves[name])
}

func (m readRefresh) curveList(t *testing.T, name string) [][]*float64 {
	t.Helper()
	var list [][]*float64
	for _, text := range read[[]json.RawMessage](t, m.Curves[name]) {
		list = append(list, m.values(t, name, text))
	}
	return list
}

// values are the numbers of a curve, or of one that is the same everywhere.
func (m readRefresh) values(t *testing.T, name string, text json.RawMessage) []*float64 {
	t.Helper()
	step, ok := steps()[name]
	if !ok {
		t.Fatalf("no plot shows %s", name)
	}
	var list []*float64
	if len(text) > 0 && text[0] != '[' {
		for range m.points() {
			list = append(list, read[*float64](t, text))
		}
	} else {
		list = read[[]*float64](t, text)
	}
	for _, v := range list {
		if v != nil && step > 0 {
			*v *= step
		}
	}
	return list
}

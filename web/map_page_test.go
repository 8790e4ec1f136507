package web

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp/kb"

	"shakerwatch/web/pagetest"
)

// With hundreds of responses the worst is found by list, by name and on the map, and each leads to its
// frequency response and its band.
func TestPageFindsTheWorstOfMany(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 8, 504, 101)
	h := NewHub(Run{Rig: f.rig, Kind: "pipe", Saves: true})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	f.add(30)
	_, e := f.refresh(h)
	w := pagetest.Open(t, address)
	w.Until(drawn("coherence", 1))

	worst, at := 0.0, 0
	for n, err := range f.progress.Errors {
		if err > worst {
			worst, at = err, n/8
		}
	}
	w.Click(responsePicker + " button")
	w.Until(`document.querySelectorAll(".pickbox:not([hidden]) li").length === 60 && document.querySelector(".pickbox:not([hidden]) li .error").textContent !== ""`)
	first := pagetest.Value[string](w, `document.querySelector(".pickbox:not([hidden]) li").textContent`)
	if want := fmt.Sprintf("A%dz%d +zerror %.3g %%", at+1, at+1, 100*worst); first != want {
		t.Errorf("the list begins with %q, want the worst, %q", first, want)
	}
	w.Picture("picker")
	for _, key := range "a41 +z" {
		w.Press(string(key))
	}
	w.Until(`document.querySelectorAll(".pickbox:not([hidden]) li").length === 11`) // A41z and A410z to A419z
	w.Press(kb.ArrowDown)
	pressEnter(w)
	w.Until(`document.querySelector("#plot-response .curves").textContent.includes("A41") && document.activeElement.matches(".picked")`)

	lowest, line, response := math.Inf(1), 0, 0
	for n, v := range e.MultipleCoherence {
		if k := n / 504; k >= 20 && v < lowest { // where something is judged
			lowest, line, response = v, k, n%504
		}
	}
	group := mapGroup(504)
	w.Until(drawn("map", 1))
	w.Focus("#plot-map .canvas")
	w.Press(kb.ArrowRight)
	step := int(math.Ceil(101.0 / mapColumns))
	for range line / step {
		w.Press(kb.ArrowRight)
	}
	for range response / group {
		w.Press(kb.ArrowDown)
	}
	value := pagetest.Value[string](w, `document.querySelector("#plot-map .cell").textContent`)
	if want := fmt.Sprintf("%.2f · A%dz ·", math.Floor(100*lowest)/100, response+1); len(value) < len(want) || value[:len(want)] != want {
		t.Errorf("the cell reads %q, want %q and so on", value, want)
	}
	w.Picture("map")
	pressEnter(w)
	w.Until(fmt.Sprintf(`document.querySelector("#plot-response .curves").textContent.includes("A%dz/S1")`, response+1))
	from := float64(line/step*step) * 0.625
	w.Until(fmt.Sprintf(`(() => { const x = %s; return x.min <= %g && x.max >= %g && x.max - x.min < 8; })()`, option("coherence", "xAxis[0]"), from, from))
	w.Clean(address)
}

func TestPageMapByPointer(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	w.Until(drawn("map", 1))
	w.Mouse(input.DispatchMouseEventTypeMousePressed, "map", 0.6, 0.5)
	w.Mouse(input.DispatchMouseEventTypeMouseReleased, "map", 0.6, 0.5)
	w.Until(option("response", `xAxis[0].min`) + ` > 100`)
	name := pagetest.Value[string](w, `document.querySelector("#plot-response .curves").textContent`)
	if !strings.Contains(name, "A7z/S1") && !strings.Contains(name, "A8z/S1") {
		t.Errorf("a click in the middle of 14 rows shows %q", name)
	}
	w.Clean(d.address)
}

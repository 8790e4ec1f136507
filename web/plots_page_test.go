package web

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"github.com/chromedp/cdproto/input"
	"github.com/chromedp/chromedp/kb"

	"shakerwatch/estimate"
	"shakerwatch/estimate/watch"
	"shakerwatch/web/pagetest"
)

// option is a part of what a plot's chart was told, as a JavaScript expression.
func option(plot, part string) string {
	return fmt.Sprintf(`echarts.getInstanceByDom(document.querySelector("#plot-%s .canvas")).getOption().%s`, plot, part)
}

// legend is the button of a curve, as a JavaScript expression.
func legend(plot, name string) string {
	return fmt.Sprintf(`[...document.querySelectorAll("#plot-%s .curves button")].find((b) => b.textContent === %q)`, plot, name)
}

func click(w *pagetest.Window, element string) {
	pagetest.Value[bool](w, fmt.Sprintf(`(() => { (%s).click(); return true; })()`, element))
}

func TestPageHidesCurves(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	w.Until(legend("independence", "S2") + `?.getAttribute("aria-pressed") === "true"`)
	w.Until(legend("coherence", "partial, A1z/S1") + `?.getAttribute("aria-pressed") === "false"`)
	if n := pagetest.Value[int](w, option("coherence", `series.find((s) => s.name.startsWith("partial")).data.length`)); n != 0 {
		t.Errorf("the partial coherence is drawn with %d points before anybody asked for it", n)
	}
	click(w, legend("coherence", "partial, A1z/S1"))
	w.Until(option("coherence", `series.find((s) => s.name.startsWith("partial")).data.length`) + ` > 100`)

	pagetest.Value[bool](w, `(() => { (`+legend("independence", "S2")+`).focus(); return true; })()`)
	w.Press(kb.Enter)
	w.Until(option("independence", `series[1].data.length`) + ` === 0`)
	w.Until(legend("independence", "S2") + `.getAttribute("aria-pressed") === "false" && document.activeElement.textContent === "S2"`)
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "independence", 0.5, 0.3)
	w.Until(`document.querySelector("#plot-independence .readout")?.textContent.includes("S1") && !document.querySelector("#plot-independence .readout").textContent.includes("S2")`)
	d.f.add(1)
	d.f.refresh(d.h) // it stays hidden
	w.Until(drawn("independence", 2))
	if n := pagetest.Value[int](w, option("independence", `series[1].data.length`)); n != 0 {
		t.Error("a hidden curve came back with the next refresh")
	}
	for _, name := range []string{"S1", "chance", "condition", "raw condition"} {
		click(w, legend("independence", name))
	}
	w.Until(`!document.querySelector("#plot-independence .note").hidden && document.querySelector("#plot-independence .note").textContent.includes("hidden")`)
	w.Picture("hidden-curves")
	w.Clean(d.address)
}

// Scales: equal ratios of frequency, and sizes in place of dB.
func TestPageScales(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	w.Until(drawn("response", 1))
	decibels := series(w, "response", 4)
	w.Press("d")
	w.Until(option("response", `yAxis[0].name`) + ` === "|H|, (m/s²)/N"`)
	linear := series(w, "response", 4)
	for i := range decibels {
		if want := math.Pow(10, *decibels[i][1]/20); math.Abs(*linear[i][1]-want) > 1e-9*want {
			t.Fatalf("point %d has %g dB and a size of %g", i, *decibels[i][1], *linear[i][1])
		}
	}
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "response", 0.5, 0.3)
	w.Until(`document.querySelector("#plot-response .readout")?.textContent.includes("(m/s²)/N")`)
	w.Press("l")
	for _, plot := range []string{"coherence", "independence", "response"} {
		w.Until(option(plot, `xAxis[0].type`) + ` === "log"`)
	}
	w.Picture("log")
	if hz := *series(w, "coherence", 0)[0][0]; hz != 0.625 {
		t.Errorf("on a scale of ratios the coherence begins at %g Hz, want the first line above 0", hz)
	}
	if first := pagetest.Value[float64](w, option("coherence", `xAxis[0].min`)); first != 0.625 {
		t.Errorf("the axis begins at %g Hz", first)
	}
	ticks := pagetest.Value[[]float64](w, option("coherence", `xAxis[0].axisLabel.customValues`))
	if len(ticks) < 6 || ticks[0] != 1 || ticks[1] != 2 || ticks[2] != 5 {
		t.Errorf("ticks at %g Hz", ticks)
	}
	w.Mouse(input.DispatchMouseEventTypeMousePressed, "coherence", 0.85, 0.5)
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "coherence", 0.88, 0.5)
	w.Mouse(input.DispatchMouseEventTypeMouseReleased, "coherence", 0.88, 0.5)
	w.Until(option("response", `xAxis[0].min`) + ` > 80`)
	if ticks := pagetest.Value[[]float64](w, option("response", `xAxis[0].axisLabel.customValues`)); len(ticks) < 3 {
		t.Errorf("a narrow band on a scale of ratios has ticks at %g Hz", ticks)
	}
	w.Picture("log-narrow")
	w.Clean(d.address)
}

// A plot that is read must not jump: its range grows at once and shrinks when asked, or after a while.
func TestPageRangeDoesNotJump(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	w.Screen(1280, 1400, "light")
	w.Until(drawn("forces", 1))
	reach := func() [2]float64 {
		return [2]float64{pagetest.Value[float64](w, option("forces", `yAxis[0].min`)), pagetest.Value[float64](w, option("forces", `yAxis[0].max`))}
	}
	before := reach()
	louder := func(by float64, number int) {
		for i := range d.st.Gxx {
			d.st.Gxx[i] *= complex(by, 0)
		}
		e := d.f.estimates()
		e.Update(d.f.snapshot)
		d.h.Refresh(d.st, e)
		w.Until(drawn("forces", number))
	}
	louder(1e4, 2)
	grown := reach()
	if grown[1] < before[1]+30 || grown[0] > before[0] {
		t.Errorf("from %g dB a level 40 dB higher made %g dB", before, grown)
	}
	louder(1e-4, 3)
	if got := reach(); got != grown {
		t.Errorf("the range fell back from %g to %g dB at once", grown, got)
	}
	click(w, `[...document.querySelectorAll("#plot-forces .tools button")].find((b) => b.textContent === "fit")`)
	w.Until(option("forces", `yAxis[0].max`) + fmt.Sprintf(` === %g`, before[1]))
	w.Clean(d.address)
}

func TestPageKeepsTraces(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	w.Until(drawn("response", 1))
	before := series(w, "response", 4)
	click(w, `[...document.querySelectorAll("#plot-response .tools button")].find((b) => b.textContent === "keep")`)
	w.Until(`document.querySelectorAll(".kept .item").length === 1`)
	w.Press("k") // of all plots
	w.Until(`document.querySelectorAll(".kept .item").length === 2`)
	d.f.add(40)
	d.f.refresh(d.h)
	w.Until(drawn("response", 2))
	choose(w, responsePicker, "A6z")
	w.Until(legend("response", "A6z/S1") + ` !== undefined`)
	kept := pagetest.Value[[][2]*float64](w, option("response", `series.find((s) => s.id === "kept-0-response.size--1").data`))
	for i := range before {
		if *before[i][1] != *kept[i][1] {
			t.Fatalf("point %d was %g dB when it was kept and is drawn with %g dB", i, *before[i][1], *kept[i][1])
		}
	}
	pagetest.Value[bool](w, `(() => { const n = document.querySelector(".kept input"); n.value = "before <b>tightening</b>"; n.dispatchEvent(new Event("change")); return true; })()`)
	w.Until(legend("response", "A before <b>tightening</b>") + ` !== undefined`)
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "response", 0.5, 0.3)
	w.Until(`document.querySelector("#plot-response .readout")?.textContent.includes("A A1z/S1")`)
	w.Picture("kept")
	click(w, legend("response", "A before <b>tightening</b>"))
	w.Until(`(` + option("response", `series.find((s) => s.id === "kept-0-response.size--1")?.data?.length`) + ` ?? 0) === 0`)
	w.Press("k")
	w.Until(`document.querySelectorAll(".kept .item").length === 3`)
	w.Press("k")
	w.Until(text("say") + `.includes("Three are kept")`)
	w.Click(".kept .item button")
	w.Until(`document.querySelectorAll(".kept .item").length === 2 && ` + legend("response", "A before <b>tightening</b>") + ` === undefined`)
	w.Clean(d.address)
}

// Plots that stand still say so, show one moment in all plots, and let a band be looked at; the rest of the
// page goes on.
func TestPageStandsStill(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	w.Press("t")
	w.Until(`document.querySelector(".halt b")?.textContent.includes("STAND STILL") && document.querySelectorAll(".plot[data-still=true] .still").length === 7`)
	d.f.add(7)
	d.f.refresh(d.h)
	w.Until(text("averaged") + ` === "47" && document.querySelector(".halt span").textContent.includes("47 averages now")`)
	w.Picture("still")
	if n := pagetest.Value[string](w, `document.querySelector("#plot-coherence").dataset.number`); n != "1" {
		t.Errorf("a plot that stands still shows refresh %s", n)
	}
	w.Screen(1280, 2400, "light") // plots that were out of view are of the same moment
	w.Until(drawn("convergence", 1))
	w.Screen(1280, 720, "light")
	pagetest.Value[bool](w, `(() => { document.querySelector("#levels .name").click(); return true; })()`)
	w.Until(`document.querySelector(".halt span").textContent.includes("let the plots run")`)
	w.Mouse(input.DispatchMouseEventTypeMousePressed, "coherence", 0.4, 0.5)
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "coherence", 0.6, 0.5)
	w.Mouse(input.DispatchMouseEventTypeMouseReleased, "coherence", 0.6, 0.5)
	w.Until(option("response", `xAxis[0].min`) + ` > 50`)
	if n := pagetest.Value[string](w, `document.querySelector("#plot-response").dataset.number`); n != "1" {
		t.Errorf("narrowing the band let the plot go on to refresh %s", n)
	}
	w.Click(".halt button")
	w.Until(drawn("coherence", 2))
	w.Until(`document.querySelector(".halt").hidden && document.querySelectorAll(".plot[data-still=true]").length === 0`)
	w.Clean(d.address)
}

// What stands in some bands is hatched in all plots of frequency, with words, until it is cleared.
func TestPageFlagsBands(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	w.Until(drawn("response", 1))
	d.h.PublishEvent(watch.Event{TimeS: 1, SinceBlock: 1, Edge: watch.Raised, Kind: "forces-correlated", Channels: []string{"S1", "S2"}, BandsHz: [][2]float64{{48, 52}, {140, 170}}})
	d.h.PublishEvent(watch.Event{TimeS: 1, SinceBlock: 2, Edge: watch.Raised, Kind: "reciprocity-off", Channels: []string{hostile}, BandsHz: [][2]float64{{150, 220}}})
	d.h.PublishEvent(watch.Event{TimeS: 1, SinceBlock: 2, Edge: watch.Raised, Kind: "disturbance", Channels: []string{}, BandsHz: [][2]float64{{20, 30}}}) // stands for nothing
	for _, plot := range []string{"coherence", "independence", "response", "map"} {
		w.Until(fmt.Sprintf(`document.querySelectorAll("#plot-%s .flagged").length === 3`, plot))
	}
	w.Picture("flagged")
	w.Mouse(input.DispatchMouseEventTypeMouseMoved, "coherence", 0.62, 0.5) // some 160 Hz
	w.Until(`document.querySelector("#plot-coherence .readout")?.textContent.includes("forces correlated: S1, S2")`)
	w.Until(`document.querySelector("#plot-coherence .tag span").textContent === "forces correlated: S1, S2 · 2 bands"`)
	w.Click(`#plot-coherence .tag[title^="forces correlated: S1, S2, 48.0 to 52.0 Hz, 140.0 to 170.0 Hz"]`)
	w.Until(option("response", `xAxis[0].min`) + ` > 45 && ` + option("response", `xAxis[0].max`) + ` < 175`)
	// Of the event that came last with a band. Not by its place: the plots above are still finding theirs.
	click(w, `document.querySelector("#events .what button")`)
	w.Until(option("response", `xAxis[0].max`) + ` < 35`)
	w.Until(`document.querySelectorAll("#plot-coherence .flagged").length === 0`)
	w.Press("b")
	w.Until(`document.querySelectorAll("#plot-coherence .flagged").length === 3`)
	d.h.PublishEvent(watch.Event{TimeS: 2, SinceBlock: 1, Edge: watch.Cleared, Kind: "forces-correlated", Channels: []string{"S1", "S2"}})
	w.Until(`document.querySelectorAll("#plot-coherence .flagged").length === 1`)
	w.Clean(d.address)
}

// The numbers behind the plots, for those who cannot see them.
func TestPageTables(t *testing.T) {
	d := newDesk(t, Run{}, 2, 14)
	w := d.w
	for _, plot := range []string{"coherence", "map"} {
		w.Until(drawn(plot, 1))
		click(w, fmt.Sprintf(`[...document.querySelectorAll("#plot-%s .tools button")].find((b) => b.textContent === "table")`, plot))
		w.Until(fmt.Sprintf(`document.querySelectorAll("#plot-%s .values tbody tr").length > 10`, plot))
		w.Until(fmt.Sprintf(`document.querySelector("#plot-%s .values caption").textContent.includes("after 40 averages")`, plot))
	}
	worst := 1.0
	for _, p := range series(w, "coherence", 0) {
		worst = math.Min(worst, *p[1])
	}
	got := pagetest.Value[string](w, `document.querySelector("#plot-coherence .values tbody tr td").textContent`)
	if want := fmt.Sprintf("%.3g", worst); got != want {
		t.Errorf("the worst coherence of the whole band is %s in the table, %s in the plot", got, want)
	}
	w.Picture("table")
	w.Clean(d.address)
}

// A page asks only for what it shows.
func TestPageAsksForWhatIsInView(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 2, 14, 1601)
	h := NewHub(Run{Rig: f.rig, Kind: "demo"})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	f.add(20)
	f.refresh(h)
	w := pagetest.Open(t, address)
	w.Until(drawn("coherence", 1) + ` && ` + option("coherence", `series[0].data?.length`) + ` < 600`) // not the 801 points that the largest plot would have
	asked := func(part string) bool {
		h.results.making.Lock()
		defer h.results.making.Unlock()
		for v := range h.results.views {
			if v.has(slices.Index(h.shape.parts, part)) {
				return true
			}
		}
		return false
	}
	f.refresh(h)
	w.Until(drawn("coherence", 2))
	if !asked("coherence") || asked("convergence") || asked(ranking) {
		t.Error("a page at its top asked for what is out of sight, or not for what is in sight")
	}
	w.Click(responsePicker + " button")
	w.Until(`document.querySelector(".pickbox li .error")?.textContent.startsWith("error")`)
	w.Press(kb.Escape)
	pagetest.Value[bool](w, `(() => { scrollTo(0, document.body.scrollHeight); return true; })()`)
	w.Until(drawn("convergence", 2))
	w.Clean(address)
}

// With periodic excitation there is one plot more: what of the chosen response and force is noise, and what
// distortion.
func TestPageDistortion(t *testing.T) {
	t.Parallel()
	f := newFeed(t, 2, 14, 401)
	f.rig.Analysis.Excitation = "periodic" // as far as the hub knows
	h := NewHub(Run{Rig: f.rig, Kind: "demo"})
	address, _ := serve(t, h)
	f.keepFresh(t, h, -1)
	f.add(20)
	st, e := f.refresh(h)
	d := estimate.NewDistortion(e.Shape)
	st.Gyy = f.snapshot.Gyy
	for n, gyy := range st.Gyy {
		d.NoiseResponse[n], d.DistortionResponse[n], d.Chance[n] = gyy*1e-3, gyy*1e-2*f.rng.Float64(), gyy*1e-4
	}
	for n := range d.NoiseForce {
		d.NoiseForce[n] = 1e-6
	}
	st.Distortion = d
	h.Refresh(st, nil)
	h.Refresh(st, e)
	w := pagetest.Open(t, address)
	w.Screen(1280, 1600, "dark")
	w.Until(drawn("distortion", 3) + ` && ` + option("distortion", `series[1].data.length`) + ` > 300`)
	data := series(w, "distortion", 0)
	noise := series(w, "distortion", 1)
	if off := *data[200][1] - *noise[200][1]; math.Abs(off-30) > 0.2 {
		t.Errorf("the noise lies %g dB below the response, want 30", off)
	}
	w.Picture("distortion")
	w.Clean(address)
}

package web

import (
	"fmt"
	"slices"
	"testing"

	"shakerwatch/web/pagetest"
)

// modules makes some of the page's scripts callable.
func modules(w *pagetest.Window, names ...string) {
	for _, name := range names {
		pagetest.Value[bool](w, fmt.Sprintf(`(() => { import("./%[1]s.js").then((m) => { window["%[1]s"] = m; }); return true; })()`, name))
		w.Until(fmt.Sprintf(`window["%s"]?.constructor === undefined && window["%s"] !== undefined`, name, name))
	}
}

// The arithmetic of the page, without a plot around it.
func TestPageArithmetic(t *testing.T) {
	d := newDesk(t, Run{}, 1, 2)
	modules(d.w, "span", "axis", "columns")

	t.Run("ranges", func(t *testing.T) {
		const decibels = `{ log_base: 0, ends: null, tick: 0 }, 10`
		const ratios = `{ log_base: 10, ends: null, tick: 0 }, 0`
		tests := []struct {
			name, pane, values string // values: lo, hi, ms
			want               []float64
		}{
			{"fits at first", decibels, `[-42, 3, 0]`, []float64{-50, 10}},
			{"grows at once", decibels, `[-42, 3, 0], [-42, 33, 10]`, []float64{-60, 40}},
			{"does not shrink at once", decibels, `[-42, 33, 0], [-42, 3, 14000], [-5, 5, 28000]`, []float64{-60, 40}},
			{"shrinks after a while", decibels, `[-42, 33, 0], [-5, 5, 14000], [-5, 5, 29001]`, []float64{-6, 6}},
			{"a peak that comes back counts anew", decibels, `[-42, 33, 0], [-5, 5, 14000], [-42, 33, 20000], [-5, 5, 30000]`, []float64{-60, 40}},
			{"never blows little differences up", decibels, `[-20.01, -20, 0]`, []float64{-26, -14}},
			{"powers of ten", ratios, `[0.3, 40, 0]`, []float64{0.1, 100}},
			{"a power of ten itself", ratios, `[1, 10, 0]`, []float64{1, 10}},
			{"one number", ratios, `[5, 5, 0]`, []float64{1, 10}},
			{"ends that are given", `{ log_base: 0, ends: [-180, 180], tick: 90 }, 0`, `[1, 2, 0]`, []float64{-180, 180}},
			{"nothing yet", decibels, `[Infinity, -Infinity, 0]`, nil},
			{"nothing any more", decibels, `[-42, 3, 0], [Infinity, -Infinity, 99000]`, []float64{-50, 10}},
		}
		for _, test := range tests {
			got := pagetest.Value[[]float64](d.w, fmt.Sprintf(`(() => { const s = new span.Span(%s); const r = [%s].map((v) => s.of(...v)).at(-1); return r === null ? [] : [r.min, r.max].map((v) => Number(v.toPrecision(9))); })()`, test.pane, test.values))
			if !slices.Equal(got, test.want) {
				t.Errorf("%s: %g, want %g", test.name, got, test.want)
			}
		}
	})

	t.Run("ticks", func(t *testing.T) {
		tests := []struct {
			name        string
			first, last int
			log         bool
			want        []float64
		}{
			{"evenly", 0, 1600, false, []float64{0, 200, 400, 600, 800, 1000}},
			{"a narrow band", 224, 231, false, []float64{140, 141, 142, 143, 144}},
			{"ratios", 1, 1600, true, []float64{1, 2, 5, 10, 20, 50, 100, 200, 500, 1000}},
			{"a band without three of those", 480, 640, true, []float64{300, 320, 340, 360, 380, 400}},
		}
		for _, test := range tests {
			got := pagetest.Value[[]float64](d.w, fmt.Sprintf(`axis.axis({ first: %d, last: %d, log: %t }, 0.625).ticks`, test.first, test.last, test.log))
			if !slices.Equal(got, test.want) {
				t.Errorf("%s: %g, want %g", test.name, got, test.want)
			}
		}
		if off := pagetest.Value[float64](d.w, `Math.max(...[false, true].flatMap((log) => [7, 80, 900].map((hz) => { const a = axis.axis({ first: 1, last: 1600, log }, 0.625); return Math.abs(a.hz(a.at(hz)) - hz); })))`); off > 1e-9 {
			t.Errorf("a frequency comes back from its place %g Hz off", off)
		}
	})

	t.Run("columns", func(t *testing.T) {
		for expression, want := range map[string]string{
			`columns.frequencies({ first: 4, runs: [[2, 1], [1, 3]] }, 0.5)`:               `[2,2.5,3.5]`,
			`columns.column({ a: [[1, null], 7] }, { from: "a", index: 0, step: 0.5 }, 2)`: `[0.5,null]`,
			`columns.column({ a: [[1, null], 7] }, { from: "a", index: 1, step: 0.5 }, 2)`: `[3.5,3.5]`,
			`columns.column({ a: null }, { from: "a", index: -1, step: 0.5 }, 3)`:          `[null,null,null]`,
			`columns.column({ a: [1.25, 3] }, { from: "a", index: -1, step: 0 }, 2)`:       `[1.25,3]`,
			`columns.column({}, { from: "a", index: -1, step: 0 }, 2)`:                     `[]`,
			`columns.sizes([20, -20, null], 20)`:                                           `[10,0.1,null]`,
			`[-1, 1.4, 1.6, 9].map((x) => columns.nearest([1, 2, 3], x))`:                  `[0,0,1,2]`,
			`columns.points(4, [[2, 1], [1, 3]])`:                                          `[{"from":4,"to":4},{"from":5,"to":5},{"from":6,"to":8}]`,
		} {
			if got := pagetest.Value[string](d.w, `JSON.stringify(`+expression+`)`); got != want {
				t.Errorf("%s is %s, want %s", expression, got, want)
			}
		}
	})
}

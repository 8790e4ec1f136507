package web

import (
	"encoding/json"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// A map as a page reads it.
type readMap struct {
	group   int
	cells   [][]*float64
	worst   [][]*float64
	unknown []*float64
	runs    [][2]int
}

func (m readRefresh) heat(t *testing.T) readMap {
	t.Helper()
	r := readMap{group: read[int](t, m.Curves["map.group"]), runs: read[[][2]int](t, m.Curves["map.runs"])}
	columns := 0
	for _, run := range r.runs {
		columns += run[0]
	}
	numbers := func(text json.RawMessage, n int) (list []*float64) {
		if len(text) > 0 && text[0] == '[' {
			return read[[]*float64](t, text)
		}
		for range n {
			list = append(list, read[*float64](t, text))
		}
		return list
	}
	rows := func(name string) (list [][]*float64) {
		for _, text := range read[[]json.RawMessage](t, m.Curves[name]) {
			list = append(list, numbers(text, columns))
		}
		return list
	}
	r.cells, r.worst = rows("map.cells"), rows("map.worst")
	r.unknown = numbers(m.Curves["map.unknown"], len(r.cells))
	return r
}

func TestMapTravels(t *testing.T) {
	tests := []struct {
		name            string
		p, lines        int
		rows, group     int
		columns, inLast int
	}{
		{"a row a response", 14, 1601, 14, 1, 62, 15},
		{"groups of responses", 504, 101, 39, 13, 51, 1},
		{"a line a column", 3, 63, 3, 1, 63, 1},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			f := newFeed(t, 2, test.p, test.lines)
			h := NewHub(Run{Rig: f.rig, Kind: "demo"})
			f.add(12)
			st, e := f.refresh(h)
			const silent = 2 // no response
			for k := range e.Lines {
				e.MultipleCoherence[k*test.p+silent] = math.NaN()
			}
			h.Refresh(st, nil)
			h.Refresh(st, e)
			m := h.refreshFor(t, h.first).heat(t)
			last := m.runs[len(m.runs)-1]
			if len(m.cells) != test.rows || m.group != test.group || len(m.cells[0]) != test.columns || last[1] != test.inLast {
				t.Fatalf("%d rows in groups of %d, %d columns, %v", len(m.cells), m.group, len(m.cells[0]), m.runs)
			}
			if got := *m.unknown[silent/test.group]; got != 1 {
				t.Errorf("%g responses of the silent one's row are unknown, want 1", got)
			}
			lowest, at := math.Inf(1), 0
			for n, v := range e.MultipleCoherence {
				if v < lowest {
					lowest, at = v, n
				}
			}
			row, column := at%test.p/test.group, at/test.p/m.runs[0][1]
			if got, want := m.cells[row][column], math.Floor(100*lowest); got == nil || *got != want {
				t.Errorf("the lowest coherence of all, %g, is not in its cell %d, %d: %v", lowest, row, column, got)
			}
			if test.group > 1 {
				if got := row*test.group + int(*m.worst[row][column]); got != at%test.p {
					t.Errorf("the worst of its cell is response %d, want %d", got, at%test.p)
				}
			}
		})
	}
}

// Each cell is the lowest of its responses and lines, and names whose it is.
func TestMapKeepsTheLowest(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, lines := rapid.IntRange(1, 130).Draw(t, "responses"), rapid.IntRange(1, 200).Draw(t, "lines")
		s := drawSpan(t, lines)
		seed := rapid.Uint64().Draw(t, "seed")
		coherence := make([]float64, p*lines)
		for i := range coherence {
			seed = seed*6364136223846793005 + 1442695040888963407 // Knuth's generator, from memory
			coherence[i] = float64(seed>>40) / (1 << 24)
			if seed>>33%7 == 0 {
				coherence[i] = math.NaN()
			}
		}
		var h heat
		h.fill(coherence, p, s)
		columns := h.columns.points()
		if h.rows() > mapRows || columns > mapColumns {
			t.Fatalf("%d rows, %d columns", h.rows(), columns)
		}
		for cell, got := range h.lowest {
			lo, hi := h.columns.lines(cell%columns, 1)
			want := math.NaN()
			for line := lo; line < hi; line++ {
				for o := cell / columns * h.group; o < min((cell/columns+1)*h.group, p); o++ {
					if v := coherence[line*p+o]; !math.IsNaN(v) && !(v >= want) {
						want = v
					}
				}
			}
			if got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
				t.Fatalf("cell %d has %g, want %g", cell, got, want)
			}
			if math.IsNaN(got) {
				continue
			}
			named := false
			for line := lo; line < hi; line++ {
				named = named || coherence[line*p+h.worst[cell]] == got
			}
			if !named || h.worst[cell]/h.group != cell/columns {
				t.Fatalf("cell %d names response %d", cell, h.worst[cell])
			}
		}
	})
}

package rig

import "testing"

func TestMistakesAreSortedByLine(t *testing.T) {
	m := Mistakes{{"a.toml", 9, "late: move"}, {"a.toml", 2, "first: keep"}, {"a.toml", 2, "second: keep"}}
	const want = "a.toml:2: first: keep\na.toml:2: second: keep\na.toml:9: late: move"
	if got := m.Error(); got != want {
		t.Errorf("got %q, want %q", got, want)
	}
	if m[0].Line != 9 {
		t.Error("Error changed the order of its receiver")
	}
}

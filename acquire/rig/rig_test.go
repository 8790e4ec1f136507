package rig

import (
	"errors"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// baseText is a rig without mistakes that the tests break in one place at a time.
const baseText = `title = "Skid"
[source]
kind = "pipe"
rate = 48000
channels = 8
[analysis]
max_frequency = 1000
line_spacing = 0.5
[[force]]
channel = 1
name = "A"
point = "112"
axis = "+z"
sensitivity = 0.01
[[force]]
channel = 2
name = "B"
point = "131"
axis = "-y"
sensitivity = 0.02
[[response]]
channel = 3
name = "seat"
point = "112"
axis = "-z"
sensitivity = 0.1
[[response]]
channel = 4
name = "end"
point = "131"
axis = "+x"
unit = "g"
sensitivity = 0.1
`

// broken is baseText with old, which has to stand in it once, replaced by its successor in pairs.
func broken(t testing.TB, pairs ...string) string {
	t.Helper()
	text := baseText
	for i := 0; i < len(pairs); i += 2 {
		if n := strings.Count(text, pairs[i]); n != 1 {
			t.Fatalf("%q stands %d times in the base text", pairs[i], n)
		}
		text = strings.Replace(text, pairs[i], pairs[i+1], 1)
	}
	return text
}

// mistakesIn parses text and gives its mistakes as "LINE: TEXT".
func mistakesIn(t testing.TB, text string) []string {
	t.Helper()
	r, err := Parse("rig.toml", []byte(text))
	if err == nil {
		return nil
	}
	var all Mistakes
	if r != nil || !errors.As(err, &all) || len(all) == 0 {
		t.Fatalf("rig %v and error %#v: want no rig and Mistakes", r, err)
	}
	var list []string
	for _, m := range all {
		if m.Path != "rig.toml" {
			t.Errorf("path %q in %v", m.Path, m)
		}
		list = append(list, strconv.Itoa(m.Line)+": "+m.Text)
	}
	return list
}

// A mistakeCase is a text and every mistake in it.
type mistakeCase struct {
	name  string
	pairs []string // changes to baseText
	want  []string // "LINE: TEXT"
}

func (c mistakeCase) run(t *testing.T) {
	t.Run(c.name, func(t *testing.T) {
		if got := mistakesIn(t, broken(t, c.pairs...)); !slices.Equal(got, c.want) {
			t.Errorf("got\n\t%s\nwant\n\t%s", strings.Join(got, "\n\t"), strings.Join(c.want, "\n\t"))
		}
	})
}

// must parses a text without mistakes.
func must(t testing.TB, text string) *Rig {
	t.Helper()
	r, err := Parse("rig.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestScale(t *testing.T) {
	for _, c := range []struct {
		name string
		c    Channel
		want float64
	}{
		{"newton", Channel{Unit: "N", FullScaleV: 10, Sensitivity: 0.01}, 1000},
		{"reversed", Channel{Unit: "m/s^2", FullScaleV: 5, Sensitivity: -0.1}, -50},
		{"g", Channel{Unit: "g", FullScaleV: 10, Sensitivity: 0.1}, 980.665},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := c.c.Scale(); got != c.want {
				t.Errorf("%v: want %v", got, c.want)
			}
		})
	}
}

func TestAxis(t *testing.T) {
	for axis, want := range map[string]struct {
		letter string
		sign   float64
	}{"+x": {"x", 1}, "-z": {"z", -1}} {
		if c := (Channel{Axis: axis}); c.Letter() != want.letter || c.Sign() != want.sign {
			t.Errorf("%s: letter %s, sign %v", axis, c.Letter(), c.Sign())
		}
	}
}

package rig

import (
	"os"
	"reflect"
	"strings"
	"testing"
)

// placed is two points, put in front of the forces.
const placed = "[[point]]\nname = \"112\"\nx = 0\ny = -0.5\nz = 1.25\n[[point]]\nname = \"bolt\"\nx = 1e3\ny = 2\nz = 0.0\n"

func withPoints(t testing.TB, pairs ...string) string {
	text := strings.Replace(baseText, "[[force]]\nchannel = 1\n", placed+"[[force]]\nchannel = 1\n", 1)
	for i := 0; i < len(pairs); i += 2 {
		if !strings.Contains(text, pairs[i]) {
			t.Fatalf("%q does not stand in the text", pairs[i])
		}
		text = strings.Replace(text, pairs[i], pairs[i+1], 1)
	}
	return text
}

func TestPointsArrive(t *testing.T) {
	want := []Point{{"112", 0, -0.5, 1.25, 10}, {"bolt", 1000, 2, 0, 15}}
	if got := must(t, withPoints(t)).Points; !reflect.DeepEqual(got, want) {
		t.Errorf("%+v, want %+v", got, want)
	}
	if got := must(t, baseText).Points; got != nil {
		t.Errorf("a file without points has %+v", got)
	}
}

func TestPointMistakes(t *testing.T) {
	for _, c := range []struct {
		name  string
		pairs []string // changes to the text with points
		want  string
	}{
		{"placed twice", []string{`"bolt"`, `"112"`}, `15: point "112": the point is placed on line 10 already: keep one`},
		{"no name", []string{"name = \"112\"\nx = 0\n", "x = 0\n"}, "9: [[point]] 1: name is missing: give that of the channels at this point"},
		{"an empty name", []string{`"bolt"`, `""`}, "15: [[point]] 2: name is empty: give one"},
		{"a number for a name", []string{`"bolt"`, `7`}, "15: [[point]] 2: name is 7: give text in quotation marks"},
		{"blanks around a name", []string{`"bolt"`, `" bolt"`}, `15: [[point]] 2: name is " bolt": leave out the blanks around it`},
		{"no height", []string{"z = 1.25\n", ""}, `9: point "112": z is missing: give metres`},
		{"text for a number", []string{"y = -0.5", `y = "left"`}, `12: point "112": y is the text "left": give a number`},
		{"not a number", []string{"y = -0.5", "y = nan"}, `12: point "112": y is nan: give a finite number`},
		{"millimetres", []string{"y = -0.5", "y = -10001"}, `12: point "112": y is -10001: give metres, at most 10000 from the origin`},
		{"an unknown key", []string{"z = 1.25\n", "z = 1.25\nrow = 1\n"}, `14: point "112": unknown key "row": known here are name, x, y, z`},
		{"single brackets", []string{placed, "[point]\nname = \"1\"\nx = 0\ny = 0\nz = 0\n"},
			"9: point is a table: write [[point]] in double brackets, once for each"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := mistakesIn(t, withPoints(t, c.pairs...)); len(got) != 1 || got[0] != c.want {
				t.Errorf("got\n\t%s\nwant\n\t%s", strings.Join(got, "\n\t"), c.want)
			}
		})
	}
}

// What a structure looks like changes nothing that is computed.
func TestPointsChangeNothingElse(t *testing.T) {
	with, without := must(t, withPoints(t)), must(t, baseText)
	if with.Grid != without.Grid || with.Source != without.Source || len(with.Forces) != len(without.Forces) {
		t.Errorf("with points %+v, without %+v", with, without)
	}
}

func TestUnplacedPointsAreSaid(t *testing.T) {
	const want = "warning: point 131 has no [[point]]: the page's sketch leaves its channels out\n"
	for _, c := range []struct {
		name, text string
		count      int
	}{
		{"one of two has a place", withPoints(t), 1},
		{"none has a place", baseText, 0},
		{"both have", withPoints(t, `"bolt"`, `"131"`), 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			var b strings.Builder
			if err := must(t, c.text).WriteTable(&b); err != nil {
				t.Fatal(err)
			}
			if got := strings.Count(b.String(), "has no [[point]]"); got != c.count || c.count > 0 && !strings.Contains(b.String(), want) {
				t.Errorf("%d such warnings, want %d, in\n%s", got, c.count, b.String())
			}
		})
	}
}

// TestDocumentedPoints holds the example of a rig with places for its points.
func TestDocumentedPoints(t *testing.T) {
	text, err := os.ReadFile("testdata/skid_points.toml")
	if err != nil {
		t.Fatal(err)
	}
	r := must(t, string(text))
	if len(r.Points) < 5 || len(r.unplaced()) > 0 {
		t.Errorf("points %+v, without a place %q", r.Points, r.unplaced())
	}
}

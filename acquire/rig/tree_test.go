package rig

import (
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/pelletier/go-toml/v2"
	"pgregory.net/rapid"
)

// treeMistakes gives what breaks the rules of TOML in text.
func treeMistakes(text string) []string {
	rep := &report{}
	parseTree([]byte(text), rep)
	var list []string
	for _, m := range rep.mistakes {
		list = append(list, strconv.Itoa(m.Line)+": "+m.Text)
	}
	return list
}

// TestDefinedTwice follows the rules of TOML 1.0, "Keys", "Table" and "Array of Tables".
func TestDefinedTwice(t *testing.T) {
	const keep = ": keep one"
	for _, c := range []struct {
		name, text string
		want       []string
	}{
		{"key", "a = 1\nb = 2\na = 3\n", []string{`3: "a" is given again, first on line 1` + keep}},
		{"key three times", "a = 1\na = 2\na = 3\n", []string{
			`2: "a" is given again, first on line 1` + keep, `3: "a" is given again, first on line 1` + keep}},
		{"bare and quoted", "a = 1\n\"a\" = 2\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"same key in two tables", "[a]\nx = 1\n[b]\nx = 1\n", nil},
		{"same key in two items", "[[a]]\nx = 1\n[[a]]\nx = 1\n", nil},
		{"key in a table", "[a]\nx = 1\nx = 2\n", []string{`3: [a]: "x" is given again, first on line 2` + keep}},
		{"key in an item", "[[a]]\nx = 1\nx = 2\n", []string{`3: [[a]]: "x" is given again, first on line 2` + keep}},
		{"key in an inline table", "a = {x = 1, x = 2}\n", []string{`1: [a]: "x" is given again, first on line 1` + keep}},
		{"key in an inline item", "a = [\n{x = 1},\n{x = 1,\n x = 2}]\n", []string{`4: [[a]]: "x" is given again, first on line 3` + keep}},
		{"table", "[a]\n[b]\n[a]\n", []string{`3: "a" is given again, first on line 1` + keep}},
		{"table three times", "[a]\n[a]\n[a]\n", []string{
			`2: "a" is given again, first on line 1` + keep, `3: "a" is given again, first on line 1` + keep}},
		{"table behind its own part", "[a.b]\n[a]\n", nil},
		{"table behind its own part, twice", "[a.b]\n[a]\n[a]\n", []string{`3: "a" is given again, first on line 2` + keep}},
		{"deeper table", "[a.b]\n[a.b]\n", []string{`2: [a]: "b" is given again, first on line 1` + keep}},
		{"tables in items", "[[a]]\n[a.b]\n[[a]]\n[a.b]\n", nil},
		{"table in one item twice", "[[a]]\n[a.b]\n[a.b]\n", []string{`3: [[a]]: "b" is given again, first on line 2` + keep}},
		{"dotted keys", "a.x = 1\na.y = 2\n", nil},
		{"dotted key twice", "a.x = 1\na.x = 2\n", []string{`2: [a]: "x" is given again, first on line 1` + keep}},
		{"dotted key behind a value", "a = 1\na.x = 2\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"dotted key into an inline table", "a = {x = 1}\na.y = 2\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"value behind a dotted key", "a.x = 1\na = 2\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"table behind a dotted key", "a.x = 1\n[a]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"table below a dotted key", "a.x = 1\n[a.b]\n", nil},
		{"dotted key into a table with a header", "[a.b]\n[a]\nb.x = 1\n", []string{`3: [a]: "b" is given again, first on line 1` + keep}},
		{"dotted key into a table on a path", "[a.b.c]\n[a]\nb.x = 1\n", []string{`3: [a]: "b" is given again, first on line 1` + keep}},
		{"table behind a value", "a = 1\n[a]\nx = 1\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"table below a value", "a = 1\n[a.b]\nx = 1\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"table below an inline table", "a = {}\n[a.b]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"table behind an inline table", "a = {}\n[a]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"items behind a table", "[a]\n[[a]]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"more items behind a table", "[a]\n[[a]]\n[[a]]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"items behind a path", "[a.b]\n[[a]]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"items behind a list", "a = [{}]\n[[a]]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"items below a list", "a = [{}]\n[[a.b]]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"items behind an empty list", "a = []\n[[a]]\n", []string{`2: "a" is given again, first on line 1` + keep}},
		{"table behind items", "[[a]]\n[a]\n", []string{`2: "a" is [[a]] on line 1: write it in double brackets here too`}},
		{"an odd key", "[\"a b\".\"\"]\nx = 1\nx = 2\n", []string{`3: ["a b".""]: "x" is given again, first on line 2` + keep}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := treeMistakes(c.text); !slices.Equal(got, c.want) {
				t.Errorf("got\n\t%s\nwant\n\t%s", strings.Join(got, "\n\t"), strings.Join(c.want, "\n\t"))
			}
		})
	}
}

// TestGivenTwiceInARig shows that what stands in the second of two tables is looked at too.
func TestGivenTwiceInARig(t *testing.T) {
	for _, c := range []mistakeCase{
		{"a table in two parts", []string{"rate = 48000\n", "[source]\nrate = 48000\n"},
			[]string{`4: "source" is given again, first on line 2: keep one`}},
		{"a key in both", []string{"rate = 48000\n", "[source]\nrate = 48000\nkind = \"demo\"\nnumber = 1\n"}, []string{
			`4: "source" is given again, first on line 2: keep one`,
			`6: [source]: "kind" is given again, first on line 3: keep one`,
			`7: [source]: unknown key "number": known here are kind, device, rate, full_scale, channels, limit`,
		}},
		{"behind dotted keys", []string{"title = \"Skid\"\n", "source.device = \"card\"\n"},
			[]string{`2: "source" is given again, first on line 1: keep one`}},
	} {
		c.run(t)
	}
}

func TestSyntax(t *testing.T) {
	const unread = "; the rest of the file was not read"
	for _, c := range []struct {
		name, text string
		want       []string
	}{
		{"no value", "[source]\nrate =\n", []string{"2: not TOML, unexpected character U+000A at start of value: correct this" + unread}},
		{"no bracket", "[source\n", []string{"1: not TOML, expected ']' to close table name: correct this" + unread}},
		{"end in a string", "\n\ntitle = \"é", []string{"3: not TOML, unterminated basic string: correct this" + unread}},
		{"end in a list", "a = [\n1,\n", []string{"2: not TOML, array is incomplete: correct this" + unread}},
		{"mistakes in front of it", "[source]\nrate = 0\nspeed = 1\n[analysis]\nmax_frequency 1000\noverlap = 7\n", []string{
			"2: [source]: rate is 0: give whole frames per second, as a recording states them",
			`3: [source]: unknown key "speed": known here are kind, device, rate, full_scale, channels, limit`,
			"5: not TOML, expected '=' after key: correct this" + unread,
		}},
		{"what follows may be periodic", "[source]\nrate = 48000\n[analysis]\nmax_frequency = 1000\nline_spacing = 1e-300\nwindow\n", []string{
			"6: not TOML, expected '=' after key: correct this" + unread}},
		{"not UTF-8", "title = \"\xff\"\n", []string{
			"1: not TOML, invalid UTF-8 character in basic string: save the file as UTF-8; the rest of it was not read"}},
		{"UTF-16", "\xff\xfet\x00=\x00", []string{
			"1: not TOML, invalid character at start of key: U+00FF 'ÿ': save the file as UTF-8; the rest of it was not read"}},
		{"a letter outside text", "é = 1\n", []string{"1: not TOML, invalid character at start of key: U+00C3 'Ã': correct this" + unread}},
		{"a zero byte", "a = 1\n\x00", []string{"2: not TOML, invalid character at start of key: U+0000: correct this" + unread}},
		{"a lone carriage return", "a = 1\rb = 2\n", []string{"1: not TOML, expected newline but got U+000D: correct this" + unread}},
		{"nested beyond reason", "a = " + strings.Repeat("[", 20_000), []string{
			"1: not TOML, arrays and inline tables are nested more than the maximum of 10000 levels deep: correct this" + unread}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := mistakesIn(t, c.text)
			got = slices.DeleteFunc(got, func(s string) bool { return strings.Contains(s, "unknown key \"a\"") })
			if !slices.Equal(got, c.want) {
				t.Errorf("got\n\t%s\nwant\n\t%s", strings.Join(got, "\n\t"), strings.Join(c.want, "\n\t"))
			}
		})
	}
}

// TestAgainstLibrary builds documents of few names, so that most define something twice, and asks
// the TOML library's decoder, which stops at the first mistake, whether there is one.
func TestAgainstLibrary(t *testing.T) {
	key := rapid.SampledFrom([]string{"a", "b", "'a'", "a.b", "b.a", "a.b.a", "a.a", "b.b.b"})
	value := rapid.SampledFrom([]string{"1", "[]", "{}", "{a = 1}", "[{a = 1}]", "[{a = 1, a = 2}]", "{b.a = 1, b.b = 2}",
		"{a = {b = 1}, a.c = 1}", "[1, {a = 1}]", "[[{a.b = 1, a = 2}]]"})
	line := rapid.Custom(func(t *rapid.T) string {
		switch rapid.IntRange(0, 3).Draw(t, "kind") {
		case 0:
			return "[" + key.Draw(t, "table") + "]\n"
		case 1:
			return "[[" + key.Draw(t, "item") + "]]\n"
		default:
			return key.Draw(t, "key") + " = " + value.Draw(t, "value") + "\n"
		}
	})
	sound, unsound := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		text := strings.Join(rapid.SliceOfN(line, 1, 6).Draw(t, "lines"), "")
		var document map[string]any
		library, own := toml.Unmarshal([]byte(text), &document), treeMistakes(text)
		if (library == nil) != (len(own) == 0) {
			t.Fatalf("%s: library %v, here %q", text, library, own)
		}
		if library == nil {
			sound++
		} else {
			unsound++
		}
	})
	if sound == 0 || unsound == 0 {
		t.Errorf("%d sound and %d unsound documents: want some of both", sound, unsound)
	}
}

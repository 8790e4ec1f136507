package rig

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"reflect"
	"regexp"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2"
)

var mistakeLine = regexp.MustCompile(`^rig\.toml:[1-9][0-9]*: [^\n\r]+: [^\n\r]+$`)

// FuzzParse holds Parse against the TOML library's own decoder, which stops at the first mistake
// but knows all rules of TOML.
func FuzzParse(f *testing.F) {
	f.Add([]byte(baseText))
	f.Add([]byte(""))
	f.Add([]byte("[source]\nrate = 1e300\n[analysis]\nmax_frequency = 1e-300\nline_spacing = 1e-300\n[source]\n"))
	f.Add([]byte("force = [{channel = 1, name = 'a'}, 2]\n[force.x]\n[[force]]\n[force]\n"))
	f.Add([]byte("a.b.c = 1\na.b.c.d = 2\n[a]\n[a.b]\n[[a.b.c]]\n[a.x]\n"))
	f.Add([]byte("title = \"\"\"\\u00e9\r\n\"\"\"\n\xff"))
	f.Add([]byte("d = 2026-01-31T10:00:00Z\ni = 0xFFFFFFFFFFFFFFFFF\nn = -nan\n"))
	paths, err := filepath.Glob(filepath.Join("testdata", "*.toml"))
	if err != nil || len(paths) == 0 {
		f.Fatalf("seeds %v, %v", paths, err)
	}
	for _, path := range paths {
		text, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text []byte) {
		r, err := Parse("rig.toml", text)
		again, errAgain := Parse("rig.toml", bytes.Clone(text))
		if !reflect.DeepEqual(r, again) || !reflect.DeepEqual(err, errAgain) {
			t.Fatalf("read twice: %+v, %v and %+v, %v", r, err, again, errAgain)
		}
		checkMistakes(t, text, err)
		checkAgainstLibrary(t, text, err)
		if err == nil {
			checkSane(t, r)
			if err := r.CheckStream("it", r.Source.RateHz, r.Source.Channels); err != nil {
				t.Errorf("its own stream: %v", err)
			}
			if err := r.WriteTable(&strings.Builder{}); err != nil {
				t.Error(err)
			}
		}
	})
}

// A failer is a test or a property.
type failer interface {
	Errorf(format string, args ...any)
	Fatalf(format string, args ...any)
}

// checkMistakes fails when err is neither nil nor Mistakes in good form.
func checkMistakes(t failer, text []byte, err error) {
	if err == nil {
		return
	}
	var all Mistakes
	if !errors.As(err, &all) || len(all) == 0 {
		t.Fatalf("error %#v", err)
	}
	lines := bytes.Count(text, []byte("\n")) + 1
	for i, m := range all {
		if !mistakeLine.MatchString(m.String()) || !utf8.ValidString(m.String()) || m.Line > lines {
			t.Errorf("mistake %q in %d lines", m, lines)
		}
		if i > 0 && m.Line < all[i-1].Line {
			t.Errorf("line %d behind line %d", m.Line, all[i-1].Line)
		}
	}
}

// checkAgainstLibrary fails when text breaks the rules of TOML for one of both only.
func checkAgainstLibrary(t *testing.T, text []byte, err error) {
	text = bytes.TrimPrefix(text, []byte("\ufeff"))
	var document map[string]any
	library := toml.Unmarshal(text, &document)
	if library != nil && err == nil {
		t.Errorf("the library refuses it: %v", library)
	}
	rep := &report{}
	parseTree(text, rep)
	if library == nil && len(rep.mistakes) > 0 {
		t.Errorf("the library accepts it: %v", rep.err())
	}
}

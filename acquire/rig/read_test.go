package rig

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"
)

func TestRead(t *testing.T) {
	path := filepath.Join("testdata", "skid.toml")
	r, err := Read(path)
	if err != nil {
		t.Fatal(err)
	}
	if r.Path != path || r.Title != "Pump skid frame, welded, two shakers" || len(r.Forces) != 2 || len(r.Responses) != 4 {
		t.Errorf("read %+v", r)
	}
}

func TestReadWhatCannotBeRead(t *testing.T) {
	if _, err := Read(filepath.Join(t.TempDir(), "none.toml")); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("no file: %v", err)
	}
	var m Mistakes
	if _, err := Read(t.TempDir()); err == nil || errors.As(err, &m) {
		t.Errorf("a directory: %v", err)
	}
}

func TestReadStopsAtTheLimit(t *testing.T) {
	path := filepath.Join(t.TempDir(), "big.toml")
	if err := os.WriteFile(path, []byte("#"+strings.Repeat(" ", maxFileBytes)), 0o600); err != nil {
		t.Fatal(err)
	}
	var m Mistakes
	if _, err := Read(path); !errors.As(err, &m) || len(m) != 1 || !strings.HasPrefix(m[0].Text, "the file is larger") {
		t.Errorf("got %v", err)
	}
	// Padded to exactly the limit a rig is still read.
	pad := "#" + strings.Repeat(" ", maxFileBytes-len(baseText)-2) + "\n"
	must(t, pad+baseText)
}

func TestDefaults(t *testing.T) {
	r := must(t, broken(t, "title = \"Skid\"\n", "", "kind = \"pipe\"\n", "", "channels = 8\n", ""))
	if want := (Source{Kind: "soundcard", RateHz: 48000, FullScaleV: 1, LimitV: 1, Channels: 4}); r.Source != want {
		t.Errorf("source %+v, want %+v", r.Source, want)
	}
	want := Analysis{MaxFrequencyHz: 1000, LineSpacingHz: 0.5, Window: "hann", Overlap: 0.5,
		Excitation: "random", Averaging: "linear", Estimator: "h1"}
	if r.Analysis != want {
		t.Errorf("analysis %+v, want %+v", r.Analysis, want)
	}
	if want := (Target{RandomError: 0.05, Share: 0.9, DepthDB: 20}); r.Target != want {
		t.Errorf("target %+v, want %+v", r.Target, want)
	}
	if r.OnFault != "hold" || r.Title != "" || r.Burst != (Burst{}) || r.Periodic != (Periodic{}) {
		t.Errorf("on fault %q, title %q, burst %+v, periodic %+v", r.OnFault, r.Title, r.Burst, r.Periodic)
	}
	force := Channel{Index: 1, Name: "B", Point: "131", Axis: "-y", Unit: "N", Sensitivity: 0.02, FullScaleV: 1, LimitV: 1, Line: 13}
	if r.Forces[1] != force {
		t.Errorf("force %+v, want %+v", r.Forces[1], force)
	}
	if r.Responses[0].Unit != "m/s^2" || r.Responses[1].Unit != "g" {
		t.Errorf("response units %q, %q", r.Responses[0].Unit, r.Responses[1].Unit)
	}
}

func TestBurstAndPeriodicDefaults(t *testing.T) {
	burst := must(t, broken(t, "[analysis]\n", "[burst]\ntrigger_force = \"B\"\n[analysis]\nexcitation = \"burst\"\n"))
	if want := (Burst{TriggerForce: "B", TriggerLevel: 0.1}); burst.Burst != want {
		t.Errorf("burst %+v, want %+v", burst.Burst, want)
	}
	every := must(t, broken(t, "[analysis]\n", "[burst]\nperiod_s = 3\n[analysis]\nexcitation = \"burst\"\n"))
	if want := (Burst{PeriodS: 3}); every.Burst != want {
		t.Errorf("burst %+v, want %+v", every.Burst, want)
	}
	periodic := must(t, broken(t, "[analysis]\n", "[periodic]\nperiod = 65536\n[analysis]\nexcitation = \"periodic\"\n",
		"line_spacing = 0.5\n", ""))
	if want := (Periodic{Period: 65536, SettlePeriods: 8, KeepPeriods: 2}); periodic.Periodic != want {
		t.Errorf("periodic %+v, want %+v", periodic.Periodic, want)
	}
	for _, r := range []*Rig{burst, periodic} {
		if r.Analysis.Window != "rectangular" || r.Analysis.Overlap != 0 || r.Grid.Hop != 0 {
			t.Errorf("%s: window %s, overlap %v, hop %d", r.Analysis.Excitation, r.Analysis.Window, r.Analysis.Overlap, r.Grid.Hop)
		}
	}
	if periodic.Analysis.LineSpacingHz != 0 {
		t.Errorf("line spacing %v where the file has none", periodic.Analysis.LineSpacingHz)
	}
}

func TestEveryKeyArrives(t *testing.T) {
	r := must(t, `title = "T"
[source]
kind = "demo"
device = "card"
rate = 51200
full_scale = 10
channels = 16
limit = 9
[analysis]
max_frequency = 800
min_frequency = 5
line_spacing = 1
window = "flattop"
overlap = 0.75
excitation = "random"
averaging = "exponential"
memory = 40
estimator = "h2"
[target]
random_error = 0.1
share = 1
depth_db = 30
[watch]
on_fault = "carry-on"
[[force]]
channel = 0x10
name = "f"
point = "1"
axis = "-x"
unit = "N"
sensitivity = -2e-3
full_scale = 4
limit = 3
[[response]]
channel = 1_0
name = "r"
point = "2"
axis = "+y"
unit = "m/s^2"
sensitivity = 1
`)
	want := &Rig{
		Path: "rig.toml", Title: "T",
		Source: Source{Kind: "demo", Device: "card", RateHz: 51200, FullScaleV: 10, LimitV: 9, Channels: 16},
		Analysis: Analysis{MaxFrequencyHz: 800, MinFrequencyHz: 5, LineSpacingHz: 1, Window: "flattop", Overlap: 0.75,
			Excitation: "random", Averaging: "exponential", Memory: 40, Estimator: "h2"},
		Target:  Target{RandomError: 0.1, Share: 1, DepthDB: 30},
		OnFault: "carry-on",
		Forces: []Channel{{Index: 15, Name: "f", Point: "1", Axis: "-x", Unit: "N", Sensitivity: -2e-3,
			FullScaleV: 4, LimitV: 3, Line: 26}},
		Responses: []Channel{{Index: 9, Name: "r", Point: "2", Axis: "+y", Unit: "m/s^2", Sensitivity: 1,
			FullScaleV: 10, LimitV: 9, Line: 35}},
		Grid:     Grid{Decimation: 25, RateHz: 2048, Block: 2048, Hop: 512, SpacingHz: 1, Lines: 801},
		rateLine: 5,
	}
	if !reflect.DeepEqual(r, want) {
		t.Errorf("got  %+v\nwant %+v", r, want)
	}
}

func TestLimitOfAChannel(t *testing.T) {
	for _, c := range []struct {
		name, source, channel string
		want                  float64
	}{
		{"full scale of the source", "full_scale = 4", "", 4},
		{"limit of the source", "full_scale = 4\nlimit = 3", "", 3},
		{"own full scale", "full_scale = 4", "full_scale = 2", 2},
		{"own larger full scale", "full_scale = 4", "full_scale = 8", 8},
		{"limit of the source below the own full scale", "full_scale = 4\nlimit = 4", "full_scale = 8", 4},
		{"own full scale below the source's limit", "full_scale = 4\nlimit = 3", "full_scale = 2", 2},
		{"own limit", "full_scale = 4\nlimit = 3", "limit = 1", 1},
		{"floating point beyond full scale", "full_scale = 1\nlimit = 10", "full_scale = 2", 10},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := must(t, broken(t, "[analysis]", c.source+"\n[analysis]", `name = "A"`, "name = \"A\"\n"+c.channel))
			if got := r.Forces[0].LimitV; got != c.want {
				t.Errorf("%v V, want %v V", got, c.want)
			}
		})
	}
}

func TestSpellings(t *testing.T) {
	want := must(t, baseText)
	for _, c := range []struct{ name, text string }{
		{"carriage returns", strings.ReplaceAll(baseText, "\n", "\r\n")},
		{"byte order mark", "\ufeff" + baseText},
		{"no newline at the end", strings.TrimSuffix(baseText, "\n")},
		{"dotted keys", broken(t, "[source]\nkind", "source.kind", "rate = ", "source . rate = ", "channels = ", "source.channels = ",
			"[analysis]\nmax", "analysis.max", "line_", "analysis.line_")},
		{"inline table", broken(t, "[source]\nkind = \"pipe\"\nrate = 48000\nchannels = 8\n",
			"source = {kind = 'pipe', rate = 48e3, \"channels\" = 0b1000}\n")},
		{"comments and blanks", "# rig\n\n" + strings.ReplaceAll(baseText, " = ", "\t=  ")},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := must(t, c.text)
			got.rateLine = want.rateLine
			for i := range got.Forces {
				got.Forces[i].Line, got.Responses[i].Line = want.Forces[i].Line, want.Responses[i].Line
			}
			if !reflect.DeepEqual(got, want) {
				t.Errorf("got  %+v\nwant %+v", got, want)
			}
		})
	}
}

func TestInlineArrayOfTables(t *testing.T) {
	r := must(t, `force = [
  {channel = 1, name = "A", point = "1", axis = "+z", sensitivity = 1},
  {channel = 3, name = "B", point = "2", axis = "+z", sensitivity = 1},
]
response = [{channel = 2, name = "C", point = "1", axis = "+z", sensitivity = 1}]
source.rate = 48000
analysis = {max_frequency = 1000, line_spacing = 1}
`)
	if len(r.Forces) != 2 || r.Forces[1].Name != "B" || r.Forces[1].Index != 2 || r.Forces[1].Line != 3 || r.Responses[0].Line != 5 {
		t.Errorf("forces %+v, responses %+v", r.Forces, r.Responses)
	}
}

func TestParseKeepsNoHoldOfText(t *testing.T) {
	text := []byte(baseText)
	r, err := Parse("rig.toml", text)
	if err != nil {
		t.Fatal(err)
	}
	for i := range text {
		text[i] = '?'
	}
	if r.Title != "Skid" || r.Forces[0].Name != "A" || r.Responses[1].Unit != "g" {
		t.Errorf("changed with the text: %+v", r)
	}
}

func TestEmptyFile(t *testing.T) {
	want := []string{
		"1: [source]: rate is missing: give frames per second",
		"1: [analysis]: max_frequency is missing: give the top of the band of interest in Hz",
		"1: [analysis]: line_spacing is missing: give the wanted spacing of spectral lines in Hz",
		"1: no force: add a table [[force]] for each",
		"1: no response: add a table [[response]] for each",
	}
	for _, text := range []string{"", "\n\n", "\ufeff", "# nothing"} {
		if got := mistakesIn(t, text); !slices.Equal(got, want) {
			t.Errorf("%q: got\n\t%s", text, strings.Join(got, "\n\t"))
		}
	}
}

package rig

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// TestGrid has the numbers of the paragraphs on resolution in the rig file's description, worked
// out by hand.
func TestGrid(t *testing.T) {
	for _, c := range []struct {
		name  string
		pairs []string
		want  Grid
	}{
		{"random", nil, Grid{18, 48000. / 18, 5400, 2700, 48000. / 18 / 5400, 2026}},
		{"exact block", []string{"rate = 48000", "rate = 51200"}, Grid{20, 2560, 5120, 2560, 0.5, 2001}},
		{"exact block in decimals", []string{"rate = 48000", "rate = 51200", "line_spacing = 0.5", "line_spacing = 0.1"},
			Grid{20, 2560, 25600, 12800, 0.1, 10001}},
		{"no decimation", []string{"rate = 48000", "rate = 2560"}, Grid{1, 2560, 5120, 2560, 0.5, 2001}},
		{"hop rounded", []string{"rate = 48000", "rate = 51200", "line_spacing = 0.5", "line_spacing = 0.5\noverlap = 0.66665"},
			Grid{20, 2560, 5120, 1707, 0.5, 2001}}, // 5120 * 0.33335 = 1706.752
		{"hop at least 1", []string{"rate = 48000", "rate = 51200", "line_spacing = 0.5", "line_spacing = 64\noverlap = 0.999"},
			Grid{20, 2560, 40, 1, 64, 16}},
		{"no overlap", []string{"rate = 48000", "rate = 51200", "line_spacing = 0.5", "line_spacing = 0.5\noverlap = 0"},
			Grid{20, 2560, 5120, 5120, 0.5, 2001}},
		{"burst", []string{"rate = 48000", "rate = 51200", "[analysis]", "[burst]\nperiod_s = 2\n[analysis]\nexcitation = \"burst\""},
			Grid{20, 2560, 5120, 0, 0.5, 2001}},
		{"periodic", []string{"[analysis]", "[periodic]\nperiod = 65536\n[analysis]\nexcitation = \"periodic\""},
			Grid{16, 3000, 4096, 0, 3000. / 4096, 1366}},
		{"periodic of an odd length", []string{"[analysis]", "[periodic]\nperiod = 65537\n[analysis]\nexcitation = \"periodic\""},
			Grid{1, 48000, 65537, 0, 48000. / 65537, 1366}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := must(t, broken(t, c.pairs...)).Grid; got != c.want {
				t.Errorf("got %+v, want %+v", got, c.want)
			}
		})
	}
}

func TestGridMistakes(t *testing.T) {
	const none = " none is left to judge between min_frequency and max_frequency: choose closer lines"
	for _, c := range []mistakeCase{
		{"rate too low", []string{"rate = 48000", "rate = 2559"},
			[]string{"4: [source]: rate 2559 is below 2.56 times max_frequency, which is 2560: raise it, or lower max_frequency"}},
		{"band absurd", []string{"= 1000", "= 1e308"},
			[]string{"4: [source]: rate 48000 is below 2.56 times max_frequency, which is +Inf: raise it, or lower max_frequency"}},
		{"rate too low, and more", []string{"rate = 48000", "rate = 100", "channels = 8", "channels = 8\nx = 1"}, []string{
			"4: [source]: rate 100 is below 2.56 times max_frequency, which is 2560: raise it, or lower max_frequency",
			`6: [source]: unknown key "x": known here are kind, device, rate, full_scale, channels, limit`}},
		{"spacing absurd", []string{"= 0.5", "= 1e-300"},
			[]string{"8: [analysis]: blocks of 2.67e+303 samples do not fit into any machine: choose a larger line_spacing"}},
		{"spacing vanishing", []string{"= 0.5", "= 5e-324"},
			[]string{"8: [analysis]: blocks of +Inf samples do not fit into any machine: choose a larger line_spacing"}},
		{"block too long", []string{"= 0.5", "= 1e-6"},
			[]string{"8: [analysis]: blocks of 2.67e+09 samples do not fit into any machine: choose a larger line_spacing"}},
		// 2^28 samples of 4 channels at 8 bytes, 4 transforms of 4 channels and 10 averages of
		// 100663297 lines at 16 bytes.
		{"block and what comes of it too long", []string{"= 0.5", "= 1e-5"},
			[]string{"8: [analysis]: the blocks need 50.5 GB of memory, more than 17.2 GB: choose wider lines, less overlap or fewer channels"}},
		// 54000 samples apart by 1: 54001 transforms of 4 channels, 20251 lines at 16 bytes.
		{"overlap too much", []string{"= 0.5", "= 0.05\noverlap = 0.99999"},
			[]string{"8: [analysis]: the blocks need 70 GB of memory, more than 17.2 GB: choose wider lines, less overlap or fewer channels"}},
		{"too many periods kept", []string{"[analysis]", "[periodic]\nperiod = 65536\nkeep_periods = 1000000\n[analysis]\nexcitation = \"periodic\""},
			[]string{"7: [periodic]: the blocks need 87.4 GB of memory, more than 17.2 GB: choose wider lines, less overlap or fewer channels"}},
		// 2147483647 is prime: no decimation, 44739243 lines.
		{"period too long", []string{"[analysis]", "[periodic]\nperiod = 2147483647\n[analysis]\nexcitation = \"periodic\""},
			[]string{"7: [periodic]: the blocks need 87.3 GB of memory, more than 17.2 GB: choose wider lines, less overlap or fewer channels"}},
		{"rate too low for the period", []string{"rate = 48000", "rate = 2000", "[analysis]", "[periodic]\nperiod = 65536\n[analysis]\nexcitation = \"periodic\""},
			[]string{"4: [source]: rate 2000 is below 2.56 times max_frequency, which is 2560: raise it, or lower max_frequency"}},
		{"lines wider than the band", []string{"= 0.5", "= 2000"},
			[]string{"8: [analysis]: with lines every 1333.33 Hz" + none}},
		{"only lines that the window spoils", []string{"= 0.5", "= 700"},
			[]string{"8: [analysis]: with lines every 666.667 Hz" + none}},
		{"no line in the band", []string{"= 0.5", "= 10\nmin_frequency = 998"},
			[]string{"8: [analysis]: with lines every 9.87654 Hz" + none}},
	} {
		c.run(t)
	}
}

func TestLowestJudged(t *testing.T) {
	for _, c := range []struct {
		name             string
		spacingHz, minHz float64
		window           string
		want             int
	}{
		{"rectangular", 0.5, 0, "rectangular", 2},
		{"Hann", 0.5, 0, "hann", 3},
		{"flat top", 0.5, 0, "flattop", 6},
		{"band begins below", 0.5, 1, "hann", 3},
		{"band begins on a line", 0.1, 0.7, "hann", 7},
		{"band begins between lines", 0.5, 10.1, "hann", 21},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := lowestJudged(c.spacingHz, c.minHz, c.window); got != c.want {
				t.Errorf("%d, want %d", got, c.want)
			}
		})
	}
}

// checkSane fails when g does not follow from the analysis settings.
func checkSane(t failer, r *Rig) {
	g, a := r.Grid, r.Analysis
	const slack = 1e-9 + 1e-12 // the promised tolerance and some rounding
	switch {
	case g.Decimation < 1 || g.Decimation > 256:
		t.Errorf("decimation %d", g.Decimation)
	case g.RateHz != r.Source.RateHz/float64(g.Decimation) || g.RateHz < 2.56*a.MaxFrequencyHz*(1-slack):
		t.Errorf("rate %v after decimation by %d of %v", g.RateHz, g.Decimation, r.Source.RateHz)
	case g.Block < 1 || g.Block > math.MaxInt32 || g.SpacingHz != g.RateHz/float64(g.Block):
		t.Errorf("block %d, spacing %v", g.Block, g.SpacingHz)
	case a.Excitation == "periodic" && g.Block*g.Decimation != r.Periodic.Period:
		t.Errorf("block %d times %d in a period of %d", g.Block, g.Decimation, r.Periodic.Period)
	case a.Excitation != "periodic" && (!onlyTwoThreeFive(g.Block) || g.SpacingHz > a.LineSpacingHz*(1+slack)):
		t.Errorf("block %d for a spacing of %v", g.Block, a.LineSpacingHz)
	case a.Excitation == "random" && (g.Hop < 1 || g.Hop > g.Block), a.Excitation != "random" && g.Hop != 0:
		t.Errorf("%s: hop %d of %d", a.Excitation, g.Hop, g.Block)
	case g.Lines < 2 || g.Lines > g.Block/2+1:
		t.Errorf("%d lines of %d samples", g.Lines, g.Block)
	case float64(g.Lines-1)*g.SpacingHz > a.MaxFrequencyHz*(1+slack) || float64(g.Lines)*g.SpacingHz < a.MaxFrequencyHz*(1-slack):
		t.Errorf("%d lines every %v Hz up to %v Hz", g.Lines, g.SpacingHz, a.MaxFrequencyHz)
	}
	for _, c := range append(append([]Channel{}, r.Forces...), r.Responses...) {
		if scale := math.Abs(c.Scale()); !(scale > 1e-31 && scale < 1e31) || c.Index < 0 || c.Index >= r.Source.Channels || !(c.LimitV > 0) {
			t.Errorf("channel %+v", c)
		}
	}
}

func TestGridIsSane(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f := &file{
			rig: &Rig{
				Source: Source{RateHz: float64(rapid.IntRange(100, 1_000_000).Draw(t, "rate"))},
				Analysis: Analysis{
					Window: "hann", Excitation: "random",
					MaxFrequencyHz: rapid.Float64Range(1, 5e5).Draw(t, "maxHz"),
					LineSpacingHz:  rapid.Float64Range(1e-3, 1e3).Draw(t, "spacingHz"),
					Overlap:        rapid.Float64Range(0, 0.95).Draw(t, "overlap"),
				},
			},
			source: &section{rep: &report{}}, analysis: &section{rep: &report{}}, burst: &section{rep: &report{}},
		}
		f.resolve()
		if len(f.source.rep.mistakes)+len(f.analysis.rep.mistakes) > 0 {
			t.Skip("a mistake")
		}
		checkSane(t, f.rig)
	})
}

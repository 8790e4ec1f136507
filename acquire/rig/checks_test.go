package rig

import (
	"slices"
	"strings"
	"testing"
)

func TestChannelsAndNames(t *testing.T) {
	for _, c := range []mistakeCase{
		{"channel twice", []string{"channel = 3", "channel = 1"},
			[]string{`22: response "seat": channel 1 is taken by force "A" on line 10: give another`}},
		{"name twice", []string{`name = "end"`, `name = "A"`},
			[]string{"29: response \"A\": the name is taken on line 11: give another"}},
		{"channel beyond the source", []string{"channels = 8", "channels = 3"},
			[]string{`28: response "end": channel 4 of 3: choose 1 to 3, or correct [source] channels`}},
		{"all together", []string{"channels = 8", "channels = 2", "channel = 3", "channel = 1", `name = "end"`, `name = "A"`}, []string{
			`22: response "seat": channel 1 is taken by force "A" on line 10: give another`,
			`28: response "A": channel 4 of 2: choose 1 to 2, or correct [source] channels`,
			"29: response \"A\": the name is taken on line 11: give another",
		}},
	} {
		c.run(t)
	}
}

func TestNoForceNoResponse(t *testing.T) {
	force := strings.Index(baseText, "[[force]]")
	response := strings.Index(baseText, "[[response]]")
	for _, c := range []struct {
		name, text string
		want       []string
	}{
		{"no force", baseText[:force] + baseText[response:], []string{"1: no force: add a table [[force]] for each"}},
		{"no response", baseText[:response], []string{"1: no response: add a table [[response]] for each"}},
		{"empty list", "\nresponse = []\n" + baseText[:response], []string{"2: no response: add a table [[response]] for each"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := mistakesIn(t, c.text); !slices.Equal(got, c.want) {
				t.Errorf("got %q", got)
			}
		})
	}
}

func TestEstimator(t *testing.T) {
	third := "[[force]]\nchannel = 5\nname = \"C\"\npoint = \"9\"\naxis = \"+x\"\nsensitivity = 1\n[[response]]\nchannel = 3\n"
	for _, c := range []mistakeCase{
		{"h2 on a square rig", []string{"[analysis]\n", "[analysis]\nestimator = \"h2\"\n"}, nil},
		{"h2 with more forces", []string{"[analysis]\n", "[analysis]\nestimator = \"h2\"\n", "[[response]]\nchannel = 3\n", third},
			[]string{`7: [analysis]: estimator "h2" with 2 responses and 3 forces: make them equal, or choose "h1" or "hv"`}},
	} {
		c.run(t)
	}
}

func TestBurst(t *testing.T) {
	burst := func(name, lines string, want ...string) mistakeCase {
		return mistakeCase{name, []string{"[analysis]\n", "[burst]\n" + lines + "\n[analysis]\nexcitation = \"burst\"\n"}, want}
	}
	for _, c := range []mistakeCase{
		burst("period", "period_s = 2.5"),
		burst("trigger", "trigger_force = \"B\"\ntrigger_level = 0.2\npre_trigger_s = 0.05"),
		burst("period zero", "period_s = 0", "7: [burst]: period_s is 0: give seconds above 0, at most a day"),
		burst("period absurd", "period_s = 1e300", "7: [burst]: period_s is 1e300: give seconds above 0, at most a day"),
		// 48000 Hz / 18 = 2666.7 Hz, 5334 samples wanted, 5400 = 2^3 3^3 5^2 taken: 2.025 s.
		burst("block longer than the period", "period_s = 2",
			"7: [burst]: period_s 2 is shorter than a block of 2.025 s: give a longer period, or a larger line_spacing"),
		burst("block as long as the period", "period_s = 2.025"),
		burst("both", "period_s = 2.5\ntrigger_force = \"A\"", "8: [burst]: period_s and trigger_force: keep one of them"),
		burst("neither", "", "6: [burst]: neither period_s nor trigger_force: give one of them"),
		burst("trigger keys with a period", "period_s = 2.5\ntrigger_level = 0.1\npre_trigger_s = 0",
			"8: [burst]: trigger_level with period_s: leave it out, it belongs to trigger_force",
			"9: [burst]: pre_trigger_s with period_s: leave it out, it belongs to trigger_force"),
		burst("trigger on a response", `trigger_force = "seat"`, `7: [burst]: no force has the name "seat": choose "A" or "B"`),
		burst("trigger on nothing", `trigger_force = ""`, "7: [burst]: trigger_force is empty: give one"),
		burst("trigger level zero", "trigger_force = \"A\"\ntrigger_level = 0",
			"8: [burst]: trigger_level is 0: give a number above 0 and below 1"),
		burst("trigger level one", "trigger_force = \"A\"\ntrigger_level = 1",
			"8: [burst]: trigger_level is 1: give a number above 0 and below 1"),
		burst("pre-trigger negative", "trigger_force = \"A\"\npre_trigger_s = -0.1",
			"8: [burst]: pre_trigger_s is -0.1: give seconds from 0, at most a day"),
		burst("pre-trigger as long as a block", "trigger_force = \"A\"\npre_trigger_s = 2.1",
			"8: [burst]: pre_trigger_s 2.1 lets a block of 2.025 s end before its burst starts: give less"),
		{"without a table", []string{"[analysis]\n", "[analysis]\nexcitation = \"burst\"\n"},
			[]string{`7: [analysis]: excitation "burst" without a table [burst]: add it with period_s or trigger_force`}},
		{"table without the excitation", []string{"[analysis]\n", "[burst]\nperiod_s = 2.5\n[analysis]\n"},
			nil},
		{"a value for the table", []string{"[source]\n", "burst = 5\n[source]\n", "[analysis]\n", "[analysis]\nexcitation = \"burst\"\n"},
			[]string{"2: burst is 5: write it as the table [burst], once"}},
		{"with a window", []string{"[analysis]\n", "[burst]\nperiod_s = 3\n[analysis]\nexcitation = \"burst\"\nwindow = \"hann\"\noverlap = 0.5\n"},
			[]string{
				`10: [analysis]: window "hann" with excitation "burst": give "rectangular"`,
				`11: [analysis]: overlap 0.5 with excitation "burst": give 0`,
			}},
		{"with the defaults said", []string{"[analysis]\n", "[burst]\nperiod_s = 3\n[analysis]\nexcitation = \"burst\"\nwindow = \"rectangular\"\noverlap = 0\n"}, nil},
	} {
		c.run(t)
	}
}

func TestPeriodic(t *testing.T) {
	periodic := func(name, lines string, want ...string) mistakeCase {
		return mistakeCase{name, []string{"[analysis]\n", "[periodic]\n" + lines + "\n[analysis]\nexcitation = \"periodic\"\n",
			"line_spacing = 0.5\n", ""}, want}
	}
	for _, c := range []mistakeCase{
		periodic("period", "period = 65536"),
		periodic("all keys", "period = 65536\nsettle_periods = 0\nkeep_periods = 3"),
		periodic("period missing", "keep_periods = 2", "6: [periodic]: period is missing: give source frames"),
		periodic("period zero", "period = 0", "7: [periodic]: period is 0: give a whole number from 1 to 2147483647"),
		periodic("period a float", "period = 65536.0", "7: [periodic]: period is 65536.0: give a whole number"),
		periodic("one period kept", "period = 65536\nkeep_periods = 1",
			"8: [periodic]: keep_periods is 1: give a whole number from 2 to 1000000"),
		periodic("settling negative", "period = 65536\nsettle_periods = -1",
			"8: [periodic]: settle_periods is -1: give a whole number from 0 to 1000000"),
		periodic("settling absurd", "period = 65536\nsettle_periods = 1000000000000",
			"8: [periodic]: settle_periods is 1000000000000: give a whole number from 0 to 1000000"),
		{"without a table", []string{"[analysis]\n", "[analysis]\nexcitation = \"periodic\"\n"},
			[]string{`7: [analysis]: excitation "periodic" without a table [periodic]: add it with period`}},
		{"table without the excitation", []string{"[analysis]\n", "[periodic]\nperiod = 65536\n[analysis]\n"},
			nil},
		{"with another estimator", []string{"[analysis]\n", "[periodic]\nperiod = 65536\n[analysis]\nexcitation = \"periodic\"\nestimator = \"hv\"\n"},
			[]string{`10: [analysis]: estimator "hv" with excitation "periodic": give "h1"`}},
		{"with a window", []string{"[analysis]\n", "[periodic]\nperiod = 65536\n[analysis]\nexcitation = \"periodic\"\nwindow = \"flattop\"\noverlap = 0.1\n"},
			[]string{
				`10: [analysis]: window "flattop" with excitation "periodic": give "rectangular"`,
				`11: [analysis]: overlap 0.1 with excitation "periodic": give 0`,
			}},
		{"an unknown excitation blames neither table", []string{"[analysis]\n", "[periodic]\nperiod = 4096\n[burst]\nperiod_s = 2\n[analysis]\nexcitation = \"sweep\"\n"},
			[]string{`11: [analysis]: excitation is "sweep": choose "random", "burst" or "periodic"`}},
	} {
		c.run(t)
	}
}

package rig

import (
	"strings"
	"testing"
)

// TestValues breaks one value of each kind, and each bound from both sides.
func TestValues(t *testing.T) {
	number := func(name, key, value, want string) mistakeCase {
		return mistakeCase{name, []string{"[source]\n", "[source]\n" + key + " = " + value + "\n"},
			[]string{"3: [source]: " + key + " is " + want}}
	}
	rate := func(name, value, want string) mistakeCase {
		return mistakeCase{name, []string{"48000", value}, []string{"4: [source]: rate is " + want}}
	}
	const whole = ": give whole frames per second, as a recording states them"
	for _, c := range []mistakeCase{
		rate("text for a number", `"48000"`, `the text "48000": give a number`),
		rate("truth value for a number", "true", "true: give a number"),
		rate("list for a number", "[48000]", "a list: give a number"),
		rate("table for a number", "{}", "a table: give a number"),
		rate("date for a number", "2026-01-31", "a date or time: give a number"),
		rate("time for a number", "10:00:00", "a date or time: give a number"),
		rate("not a number", "nan", "nan: give a finite number"),
		rate("infinite", "inf", "inf: give a finite number"),
		rate("negatively infinite", "-inf", "-inf: give a finite number"),
		rate("float out of range", "1e400", "1e400, out of range: give a number"),
		rate("integer out of range", "9223372036854775808", "9223372036854775808, out of range: give a number"),
		rate("rate zero", "0", "0"+whole),
		rate("rate negative", "-48000", "-48000"+whole),
		rate("rate with a fraction", "48000.5", "48000.5"+whole),
		rate("rate beyond a recording", "4294967296", "4294967296"+whole),
		rate("rate absurd", "1e300", "1e300"+whole),
		rate("rate vanishing", "1e-400", "1e-400"+whole),
		number("full scale zero", "full_scale", "0", "0: give a number above 0"),
		number("full scale negative", "full_scale", "-1.5", "-1.5: give a number above 0"),
		number("limit zero", "limit", "0.0", "0.0: give a number above 0"),
		number("limit not a number", "limit", "+nan", "+nan: give a finite number"),
		number("device not text", "device", "3", "3: give text in quotation marks"),
		number("device with a control character", "device", `"a\tb"`,
			`"a\tb" with characters that cannot be seen: leave them out`),
		{"channels zero", []string{"channels = 8", "channels = 0"}, []string{"5: [source]: channels is 0: give a whole number from 1 to 65535"}},
		{"channels a float", []string{"channels = 8", "channels = 8.0"}, []string{"5: [source]: channels is 8.0: give a whole number"}},
		{"channels absurd", []string{"channels = 8", "channels = 1_000_000_000_000_000_000"},
			[]string{"5: [source]: channels is 1_000_000_000_000_000_000: give a whole number from 1 to 65535"}},
		{"channels out of range", []string{"channels = 8", "channels = 0xFFFFFFFFFFFFFFFF"},
			[]string{"5: [source]: channels is 0xFFFFFFFFFFFFFFFF, out of range: give a whole number"}},
		{"kind unknown", []string{`"pipe"`, `"Pipe"`}, []string{`3: [source]: kind is "Pipe": choose "soundcard", "pipe" or "demo"`}},
		{"kind not text", []string{`"pipe"`, "1"}, []string{`3: [source]: kind is 1: choose "soundcard", "pipe" or "demo"`}},
		{"title not text", []string{`"Skid"`, "5"}, []string{"1: title is 5: give text in quotation marks"}},
		{"title of two lines", []string{`"Skid"`, "\"\"\"a\nb\"\"\""},
			[]string{`1: title is "a\nb" with characters that cannot be seen: leave them out`}},
		{"long value is cut", []string{"48000", `"` + strings.Repeat("é", 41) + `"`},
			[]string{`4: [source]: rate is the text "` + strings.Repeat("é", 40) + `...": give a number`}},
	} {
		c.run(t)
	}
}

func TestAnalysisValues(t *testing.T) {
	with := func(name, lines string, want ...string) mistakeCase {
		return mistakeCase{name, []string{"[analysis]\n", "[analysis]\n" + lines + "\n"}, want}
	}
	for _, c := range []mistakeCase{
		{"max_frequency zero", []string{"= 1000", "= 0"}, []string{"7: [analysis]: max_frequency is 0: give a number above 0"}},
		{"line_spacing zero", []string{"= 0.5", "= 0.0"}, []string{"8: [analysis]: line_spacing is 0.0: give a number above 0"}},
		with("min_frequency negative", "min_frequency = -1", "7: [analysis]: min_frequency is -1: give 0 or more"),
		with("min_frequency at the top", "min_frequency = 1000",
			"7: [analysis]: min_frequency 1000 is not below max_frequency 1000: lower it"),
		with("window unknown", `window = "Hann"`, `7: [analysis]: window is "Hann": choose "hann", "rectangular" or "flattop"`),
		with("overlap one", "overlap = 1", "7: [analysis]: overlap is 1: give 0 or more, below 1"),
		with("overlap negative", "overlap = -0.1", "7: [analysis]: overlap is -0.1: give 0 or more, below 1"),
		with("excitation unknown", `excitation = "sine"`, `7: [analysis]: excitation is "sine": choose "random", "burst" or "periodic"`),
		with("averaging unknown", `averaging = ""`, `7: [analysis]: averaging is "": choose "linear" or "exponential"`),
		with("estimator unknown", `estimator = "h3"`, `7: [analysis]: estimator is "h3": choose "h1", "h2" or "hv"`),
		with("memory missing", `averaging = "exponential"`,
			"6: [analysis]: memory is missing: give the number of blocks, 2 or more, that exponential averaging remembers"),
		with("memory one", "averaging = \"exponential\"\nmemory = 1", "8: [analysis]: memory is 1: give a whole number from 2 to 2147483647"),
		with("memory a float", "averaging = \"exponential\"\nmemory = 20.0", "8: [analysis]: memory is 20.0: give a whole number"),
		with("memory with linear", "memory = 20",
			`7: [analysis]: memory with averaging "linear": leave it out, or choose averaging "exponential"`),
		with("the rest lands in another table", "[target]\nrandom_error = 0\n[target.x]",
			"6: [analysis]: max_frequency is missing: give the top of the band of interest in Hz",
			"6: [analysis]: line_spacing is missing: give the wanted spacing of spectral lines in Hz",
			"8: [target]: random_error is 0: give a number above 0",
			`9: [target]: unknown table "x": known here are random_error, share, depth_db`),
	} {
		c.run(t)
	}
}

func TestTargetAndWatchValues(t *testing.T) {
	with := func(name, lines string, want ...string) mistakeCase {
		return mistakeCase{name, []string{"[analysis]\n", lines + "\n[analysis]\n"}, want}
	}
	for _, c := range []mistakeCase{
		with("random error zero", "[target]\nrandom_error = 0", "7: [target]: random_error is 0: give a number above 0"),
		with("share zero", "[target]\nshare = 0", "7: [target]: share is 0: give a number above 0 and at most 1"),
		with("share above one", "[target]\nshare = 1.01", "7: [target]: share is 1.01: give a number above 0 and at most 1"),
		with("depth zero", "[target]\ndepth_db = 0", "7: [target]: depth_db is 0: give a number above 0"),
		with("depth infinite", "[target]\ndepth_db = inf", "7: [target]: depth_db is inf: give a finite number"),
		with("on_fault unknown", "[watch]\non_fault = \"stop\"", `7: [watch]: on_fault is "stop": choose "hold" or "carry-on"`),
	} {
		c.run(t)
	}
}

func TestChannelValues(t *testing.T) {
	one := func(name, old, replacement string, want ...string) mistakeCase {
		return mistakeCase{name, []string{old, replacement}, want}
	}
	const first = `name = "A"` + "\n"
	for _, c := range []mistakeCase{
		one("channel zero", "channel = 1", "channel = 0", `10: force "A": channel is 0: give a whole number from 1 to 65535`),
		one("channel with a fraction", "channel = 1", "channel = 1.5", `10: force "A": channel is 1.5: give a whole number`),
		one("channel absurd", "channel = 1", "channel = 1000000000000000000",
			`10: force "A": channel is 1000000000000000000: give a whole number from 1 to 65535`),
		one("name empty", first, "name = \"\"\n", "11: [[force]] 1: name is empty: give one"),
		one("name not text", first, "name = 7\n", "11: [[force]] 1: name is 7: give text in quotation marks"),
		one("name with blanks around it", first, "name = \"A \"\n",
			`11: [[force]] 1: name is "A ": leave out the blanks around it`),
		one("name with a control character", first, "name = \"A\\u0007\"\n",
			`11: [[force]] 1: name is "A\a" with characters that cannot be seen: leave them out`),
		one("name that turns the writing direction", first, "name = \"A\\u202e\"\n",
			`11: [[force]] 1: name is "A\u202e" with characters that cannot be seen: leave them out`),
		one("point not text", first+`point = "112"`, first+"point = 112", `12: force "A": point is 112: give text in quotation marks`),
		one("point empty", first+`point = "112"`, first+"point = ''", `12: force "A": point is empty: give one`),
		one("axis without a sign", `axis = "+z"`, `axis = "z"`,
			`13: force "A": axis is "z": choose "+x", "-x", "+y", "-y", "+z" or "-z"`),
		one("axis in capitals", `axis = "+z"`, `axis = "+Z"`,
			`13: force "A": axis is "+Z": choose "+x", "-x", "+y", "-y", "+z" or "-z"`),
		one("force in another unit", first, first+"unit = \"kN\"\n", `12: force "A": unit is "kN": choose "N"`),
		one("response in another unit", `"g"`, `"m/s2"`, `32: response "end": unit is "m/s2": choose "m/s^2" or "g"`),
		one("sensitivity zero", "0.01\n", "-0.0\n", `14: force "A": sensitivity is -0.0: give a number other than 0`),
		one("sensitivity not a number", "0.01\n", "nan\n", `14: force "A": sensitivity is nan: give a finite number`),
		one("sensitivity infinite", "0.01\n", "+inf\n", `14: force "A": sensitivity is +inf: give a finite number`),
		one("sensitivity vanishing", "0.01\n", "1e-310\n",
			`14: force "A": digital full scale is +Inf N or m/s^2: correct sensitivity or full_scale`),
		one("sensitivity huge", "0.01\n", "1e100\n",
			`14: force "A": digital full scale is 1e-100 N or m/s^2: correct sensitivity or full_scale`),
		one("own full scale zero", first, first+"full_scale = 0\n", `12: force "A": full_scale is 0: give a number above 0`),
		one("own limit negative", first, first+"limit = -1\n", `12: force "A": limit is -1: give a number above 0`),
	} {
		c.run(t)
	}
}

func TestUnknownKeys(t *testing.T) {
	const top = "title, source, analysis, burst, periodic, target, watch, force, response, point"
	for _, c := range []mistakeCase{
		{"at the top", []string{`title = "Skid"`, `Title = "Skid"`}, []string{`1: unknown key "Title": known here are ` + top}},
		{"a table", []string{"[[force]]\nchannel = 1\n", "[[points]]\nx = 1\n[Target]\n[[force]]\nchannel = 1\n"}, []string{
			`9: unknown table "points": known here are ` + top,
			`11: unknown table "Target": known here are ` + top,
		}},
		{"in a table", []string{"channels = 8", "channels = 8\nRate = 1"},
			[]string{`6: [source]: unknown key "Rate": known here are kind, device, rate, full_scale, channels, limit`}},
		{"in a force", []string{`name = "A"`, "name = \"A\"\ngain = 1"}, []string{
			`12: force "A": unknown key "gain": known here are name, channel, point, axis, unit, sensitivity, full_scale, limit`}},
		{"a table in a response", []string{`unit = "g"`, "unit = \"g\"\n[response.place]\nx = 1\n[watch]\n[[response]]\nchannel=5\nname='r'\npoint='9'\naxis='+x'"}, []string{
			`27: response "end": sensitivity is missing: give volts per unit`,
			`33: response "end": unknown table "place": known here are name, channel, point, axis, unit, sensitivity, full_scale, limit`}},
		{"a key with a dot in it", []string{`title = "Skid"`, `"source.rate" = 1`},
			[]string{`1: unknown key "source.rate": known here are ` + top}},
		{"an empty key", []string{`title = "Skid"`, `"" = 1`}, []string{`1: unknown key "": known here are ` + top}},
		{"a table behind a value", []string{"rate = 48000", "rate.hz = 48000"}, []string{`4: [source]: rate is a table: give a number`}},
	} {
		c.run(t)
	}
}

func TestMissingKeys(t *testing.T) {
	for _, c := range []mistakeCase{
		{"rate", []string{"rate = 48000\n", ""}, []string{"2: [source]: rate is missing: give frames per second"}},
		{"max_frequency", []string{"max_frequency = 1000\n", ""},
			[]string{"6: [analysis]: max_frequency is missing: give the top of the band of interest in Hz"}},
		{"line_spacing", []string{"line_spacing = 0.5\n", ""},
			[]string{"6: [analysis]: line_spacing is missing: give the wanted spacing of spectral lines in Hz"}},
		{"all of a table", []string{"[source]\nkind = \"pipe\"\nrate = 48000\nchannels = 8\n", ""},
			[]string{"1: [source]: rate is missing: give frames per second"}},
		{"all of a force", []string{"[[force]]\nchannel = 1\n", "[[force]]\n[[force]]\nchannel = 1\n"}, []string{
			"9: [[force]] 1: channel is missing: give the input channel, from 1",
			"9: [[force]] 1: name is missing: give one that no other channel has",
			"9: [[force]] 1: point is missing: give the point of the structure",
			"9: [[force]] 1: axis is missing: give the transducer's positive direction, as +z",
			"9: [[force]] 1: sensitivity is missing: give volts per unit",
		}},
		{"one key of a response", []string{"axis = \"-z\"\n", ""},
			[]string{`21: response "seat": axis is missing: give the transducer's positive direction, as +z`}},
	} {
		c.run(t)
	}
}

func TestShapes(t *testing.T) {
	for _, c := range []mistakeCase{
		{"a value for a table", []string{"[source]\nkind = \"pipe\"\nrate = 48000\nchannels = 8\n", "source = 5\n"},
			[]string{"2: source is 5: write it as the table [source], once"}},
		{"an array for a table", []string{"[source]\n", "[[source]]\n"}, []string{"2: source is a list: write it as the table [source], once"}},
		{"a list of values for a table", []string{"[source]\nkind = \"pipe\"\nrate = 48000\nchannels = 8\n", "source = [1]\n"},
			[]string{"2: source is a list: write it as the table [source], once"}},
		{"single brackets", []string{"[[force]]\nchannel = 1\n", "[force]\nchannel = 1\n", "[[force]]\nchannel = 2\n", "[force]\nchannel = 2\n"}, []string{
			"9: force is a table: write [[force]] in double brackets, once for each",
			`15: "force" is given again, first on line 9: keep one`,
		}},
		{"single brackets after double ones", []string{"[[force]]\nchannel = 2\n", "[force]\nchannel = 2\n"},
			[]string{`15: "force" is [[force]] on line 9: write it in double brackets here too`}},
		{"a value among tables", []string{"title = \"Skid\"\n", "force = [1]\n"}, []string{
			"1: item 1 of force is 1: write it as a table [[force]]",
			`9: "force" is given again, first on line 1: keep one`,
			`15: "force" is given again, first on line 1: keep one`,
		}},
		{"a value for the tables", []string{"title = \"Skid\"\n", "force = 1\n"}, []string{
			"1: force is 1: write [[force]] in double brackets, once for each",
			`9: "force" is given again, first on line 1: keep one`,
			`15: "force" is given again, first on line 1: keep one`,
		}},
	} {
		c.run(t)
	}
}

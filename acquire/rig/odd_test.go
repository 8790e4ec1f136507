package rig

import (
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// oddValues are what a key may be followed by, likely or not.
var oddValues = []string{
	"0", "1", "-1", "2", "3", "8", "0.5", "-0.0", "1e300", "-1e300", "1e-300", "1e-400", "5e-324", "1e400", "inf", "-inf", "nan",
	"9223372036854775807", "9223372036854775808", "-9223372036854775808", "1000000000000000000", "65535", "65536", "4294967295",
	"2147483647", "0.999999999", "true", "[]", "{}", "[1]", "[{}]", "2026-01-31", `""`, `" "`, `"A"`, `"112"`, `"+z"`, `"h2"`,
	`"burst"`, `"periodic"`, `"exponential"`, `"rectangular"`, `"hann"`, `"\u0000"`, `"\n"`,
}

// TestOddValues changes a few values of a sound rig at a time: whatever comes of it is a sane rig
// or mistakes with lines, and soon.
func TestOddValues(t *testing.T) {
	extra := "min_frequency = 0\nwindow = \"hann\"\noverlap = 0.5\nexcitation = \"random\"\naveraging = \"linear\"\n" +
		"[burst]\nperiod_s = 3\n[periodic]\nperiod = 65536\nsettle_periods = 8\nkeep_periods = 2\n[[force]]\nchannel = 1\n"
	text := broken(t, "[[force]]\nchannel = 1\n", extra)
	sound := 0
	rapid.Check(t, func(t *rapid.T) {
		lines := strings.SplitAfter(text, "\n")
		for range rapid.IntRange(0, 4).Draw(t, "changes") {
			i := rapid.IntRange(0, len(lines)-2).Draw(t, "line")
			if key, _, ok := strings.Cut(lines[i], " = "); ok {
				lines[i] = key + " = " + rapid.SampledFrom(oddValues).Draw(t, "value") + "\n"
			}
		}
		for _, head := range []string{"[burst]", "[periodic]"} {
			if rapid.Bool().Draw(t, head) {
				lines = without(lines, head)
			}
		}
		changed := []byte(strings.Join(lines, ""))
		r, err := Parse("rig.toml", changed)
		checkMistakes(t, changed, err)
		if err == nil {
			sound++
			checkSane(t, r)
		}
	})
	if sound == 0 {
		t.Error("no sound rig among all")
	}
}

// without takes the table with that header out of lines.
func without(lines []string, header string) []string {
	var kept []string
	inside := false
	for _, line := range lines {
		if strings.HasPrefix(line, "[") {
			inside = line == header+"\n"
		}
		if !inside {
			kept = append(kept, line)
		}
	}
	return kept
}

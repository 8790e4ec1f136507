package main

import (
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"
)

// TestUnusableInput: one clear line and exit status 2 for whatever the program can't begin with, and
// no folder left behind.
func TestUnusableInput(t *testing.T) {
	dir := t.TempDir()
	rigFile, recording := caseFiles("two_forces_hann")
	write := func(name, text string) string {
		path := filepath.Join(dir, name)
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		return path
	}
	good, err := os.ReadFile(rigFile)
	if err != nil {
		t.Fatal(err)
	}
	with := func(name, old, new string) string {
		text := strings.Replace(string(good), old, new, 1)
		if text == string(good) {
			t.Fatalf("the reference rig file has no %q any more", old)
		}
		return write(name, text)
	}
	rate := regexp.MustCompile(`(?m)^rate = .*$`).FindString(string(good))
	empty := write("empty.wav", "")
	notWAV := write("notes.wav", "these are not the samples you look for")
	short := shortRecording(t, recording, filepath.Join(dir, "short.wav"), 44+16*1000)
	out := filepath.Join(dir, "results")

	for _, test := range []struct {
		name string
		args []string
		want string // in the one line
	}{
		{"unknown command", []string{"watch"}, "watch: no such command: choose"},
		{"unknown flag", []string{"--fast"}, "see shakerwatch --help"},
		{"no recording", []string{"replay", rigFile}, "replay: 1 arguments: give RIG.toml RECORDING"},
		{"too many arguments", []string{"replay", rigFile, recording, recording}, "give RIG.toml RECORDING"},
		{"a flag of another command", []string{"--pace", "2"}, "--pace: the demo has no such flag"},
		{"check has no flags", []string{"check", rigFile, "--out", out}, "--out: check has no such flag"},
		{"negative pace", []string{"replay", rigFile, recording, "--pace", "-1"}, "--pace -1: choose 0 or more"},
		{"pace is no number", []string{"replay", rigFile, recording, "--pace", "NaN"}, "--pace NaN: choose 0 or more"},
		{"no blocks", []string{"replay", rigFile, recording, "--blocks", "0"}, "--blocks 0: choose 1 or more"},
		{"replace without out", []string{"replay", rigFile, recording, "--replace"}, "--replace"},
		{"rig file is not there", []string{"replay", filepath.Join(dir, "none.toml"), recording}, "none.toml"},
		{"recording is not there", []string{"replay", rigFile, filepath.Join(dir, "none.wav")}, "none.wav"},
		{"rig file is a folder", []string{"replay", dir, recording}, dir},
		{"recording is a folder", []string{"replay", rigFile, dir}, dir},
		{"recording as rig file", []string{"replay", recording, rigFile}, "run.wav"},
		{"empty recording", []string{"replay", rigFile, empty}, "empty.wav"},
		{"no recording at all", []string{"replay", rigFile, notWAV}, "notes.wav"},
		{"less than a block", []string{"replay", rigFile, short}, "are less than one block of"},
		{"another rate", []string{"replay", with("rate.toml", rate, "rate = 5000"), recording}, "rate.toml:"},
		{"channel beyond the recording", []string{"replay", with("channel.toml", "channel = 8", "channel = 9"), recording}, "channel.toml:"},
		{"confidence of nothing", []string{"replay", rigFile, recording, "--confidence", "1"}, "--confidence"},
		{"excitation of a recording", []string{"replay", rigFile, recording, "--excitation", "burst"}, "--excitation"},
		{"fault of a recording", []string{"replay", rigFile, recording, "--fault", "knock@1s:1z"}, "--fault"},
		{"only without a summary", []string{"replay", rigFile, recording, "--only", filepath.Join(dir, "none.json")}, "none.json"},
		{"only with something else", []string{"replay", rigFile, recording, "--only", rigFile}, "no summary"},
		{"only with other blocks", []string{"replay", rigFile, recording, "--only", write("other.json", `{"block_starts": [0, 7]}`)}, "starts at frame 7"},
		{"only beyond the end", []string{"replay", rigFile, recording, "--only", write("long.json", `{"block_starts": [204800000]}`)}, "beyond the"},
		{"only out of order", []string{"replay", rigFile, recording, "--only", write("order.json", `{"block_starts": [2048, 0]}`)}, "ascending"},
		{"address for strangers", []string{"replay", rigFile, recording, "--listen", "0.0.0.0:0"}, "loopback"},
		{"address is none", []string{"replay", rigFile, recording, "--listen", "here"}, "--listen here"},
		{"live without a source", []string{"live", with("kind.toml", "[source]", "[source]\nkind = \"soundcard\""), "--headless"}, "kind.toml"},
		{"noise of another rig", []string{"replay", rigFile, recording, "--noise", recording}, "give the noise.npz of a setup check"},
		{"out is a file", []string{"replay", rigFile, recording, "--out", filepath.Join(empty, "x")}, "empty.wav"},
	} {
		t.Run(test.name, func(t *testing.T) {
			args := test.args
			if len(args) > 0 && args[0] != "check" && !strings.Contains(strings.Join(args, " "), "--") {
				args = append(args, "--headless", "--out", out)
			}
			start := time.Now()
			status, stdout, stderr := shakerwatch(t, args...)
			if status != exitUnusable {
				t.Fatalf("exit status %d, want 2; %q %q", status, stdout, stderr)
			}
			if strings.Count(stderr, "\n") != 1 || !strings.Contains(stderr, test.want) {
				t.Errorf("standard error %q, want one line with %q", stderr, test.want)
			}
			if took := time.Since(start); took > 10*time.Second {
				t.Errorf("it took %v", took)
			}
			if _, err := os.Stat(out); err == nil {
				t.Error("a folder is left behind")
			}
		})
	}
}

func TestEveryMistakeOfARigFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "rig.toml")
	const text = "[source]\nrate = \"fast\"\ncolour = 3\n[analysis]\nmax_frequency = -1\n"
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	status, _, stderr := shakerwatch(t, "check", path)
	if status != exitUnusable {
		t.Fatalf("exit status %d", status)
	}
	lines := strings.Split(strings.TrimSpace(stderr), "\n")
	form := regexp.MustCompile(`^` + regexp.QuoteMeta(path) + `:\d+: .+: .+$`)
	for _, line := range lines {
		if !form.MatchString(line) {
			t.Errorf("%q does not say where, what and what to do", line)
		}
	}
	if len(lines) < 5 { // rate, colour, max_frequency, line_spacing, force, response
		t.Errorf("only %d mistakes are reported:\n%s", len(lines), stderr)
	}
}

func TestCheck(t *testing.T) {
	rigFile, _ := caseFiles("scrambled")
	status, stdout, stderr := shakerwatch(t, "check", rigFile)
	if status != exitDone || stderr != "" {
		t.Fatalf("exit status %d, %q", status, stderr)
	}
	for _, want := range []string{"decimation", "line spacing", "block duration", "driving point", "warning: force"} {
		if !strings.Contains(stdout, want) {
			t.Errorf("nothing about %q in\n%s", want, stdout)
		}
	}
}

// caseFiles are the rig file and the recording of a reference case.
func caseFiles(name string) (rigFile, recording string) {
	return filepath.Join(testdata, name, "rig.toml"), filepath.Join(testdata, name, "run.wav")
}

// shortRecording copies the first bytes of a recording, which is cut short then.
func shortRecording(t *testing.T, from, to string, bytes int) string {
	t.Helper()
	text, err := os.ReadFile(from)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(to, text[:bytes], 0o644); err != nil {
		t.Fatal(err)
	}
	return to
}

package main

import (
	"bytes"
	"encoding/binary"
	"errors"
	"io"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/sbinet/npyio/npz"

	"shakerwatch/acquire/wav"
)

// allFrames are the samples of a whole recording, channel fastest.
func allFrames(t *testing.T, path string) []float64 {
	t.Helper()
	r, err := wav.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	samples := make([]float64, int(r.Frames())*r.Channels())
	for at := 0; at < len(samples); {
		n, err := r.Read(samples[at:])
		if err != nil {
			t.Fatal(err)
		}
		at += n * r.Channels()
	}
	return samples
}

// rawFrames are a recording's frames as a pipe brings them.
func rawFrames(t *testing.T, recording, encoding string) []byte {
	t.Helper()
	var raw []byte
	for _, v := range allFrames(t, recording) {
		switch encoding {
		case "s16":
			raw = binary.LittleEndian.AppendUint16(raw, uint16(int16(v*0x8000)))
		case "f32":
			raw = binary.LittleEndian.AppendUint32(raw, math.Float32bits(float32(v)))
		case "f64":
			raw = binary.LittleEndian.AppendUint64(raw, math.Float64bits(v))
		}
	}
	return raw
}

// pipeRig is the rig file of a reference case, with a pipe as its source.
func pipeRig(t *testing.T, name string) string {
	t.Helper()
	rigFile, recording := caseFiles(name)
	text, err := os.ReadFile(rigFile)
	if err != nil {
		t.Fatal(err)
	}
	r, err := wav.Open(recording)
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	lines := []string{}
	for line := range strings.Lines(string(text)) {
		if !strings.HasPrefix(line, "kind") && !strings.HasPrefix(line, "channels") {
			lines = append(lines, line)
		}
	}
	source := "[source]\nkind = \"pipe\"\nchannels = " + string(rune('0'+r.Channels())) + "\n"
	path := filepath.Join(t.TempDir(), "pipe.toml")
	if err := os.WriteFile(path, []byte(strings.Replace(strings.Join(lines, ""), "[source]\n", source, 1)), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

// runPipe runs the program live with raw bytes on standard input.
func runPipe(t *testing.T, stdin io.Reader, args ...string) (status int, stdout, stderr string) {
	t.Helper()
	path, err := builtProgram()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(path, append([]string{"live", "--headless"}, args...)...)
	var out, errs bytes.Buffer
	cmd.Stdin, cmd.Stdout, cmd.Stderr = stdin, &out, &errs
	if err := cmd.Run(); err != nil && !errors.As(err, new(*exec.ExitError)) {
		t.Fatal(err)
	}
	return cmd.ProcessState.ExitCode(), out.String(), errs.String()
}

// TestPipe sends recordings through a pipe: the results are those of NumPy and SciPy, and the bytes
// of a replay of what was recorded on the way.
func TestPipe(t *testing.T) {
	for _, test := range []struct{ name, encoding string }{
		{"two_forces_hann", "s16"}, {"gaps_and_overranges", "f32"}, {"float64", "f64"},
	} {
		t.Run(test.name, func(t *testing.T) {
			t.Parallel()
			rigFile := pipeRig(t, test.name)
			_, recording := caseFiles(test.name)
			raw := append(rawFrames(t, recording, test.encoding), 1, 2, 3) // three bytes of a frame that never ends
			out := filepath.Join(t.TempDir(), "results")
			status, _, stderr := runPipe(t, bytes.NewReader(raw), rigFile, "--encoding", test.encoding, "--out", out)
			if status != exitDone {
				t.Fatalf("exit status %d: %s", status, stderr)
			}
			if !strings.Contains(stderr, "warning: standard input ended") {
				t.Errorf("no word about the part of a frame at the end: %q", stderr)
			}
			compareArrays(t, filepath.Join(out, "estimates.npz"), filepath.Join(testdata, test.name, "expected.npz"))

			again := filepath.Join(t.TempDir(), "again")
			if status, _, stderr := shakerwatch(t, "replay", rigFile, filepath.Join(out, "recording.wav"), "--headless", "--out", again); status != exitDone {
				t.Fatalf("replay of the recording: exit status %d: %s", status, stderr)
			}
			if !bytes.Equal(readFile(t, again, "estimates.npz"), readFile(t, out, "estimates.npz")) {
				t.Error("a replay of the recording gives other bytes")
			}
			if !bytes.Equal(readFile(t, again, "events.jsonl"), readFile(t, out, "events.jsonl")) {
				t.Error("a replay of the recording raises other events")
			}
		})
	}
}

func TestPipeThatStalls(t *testing.T) {
	t.Parallel()
	rigFile := pipeRig(t, "two_forces_hann")
	_, recording := caseFiles("two_forces_hann")
	raw := rawFrames(t, recording, "f32")
	stalled, writer, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	defer writer.Close()
	written := make(chan error, 1)
	go func() {
		_, err := writer.Write(raw) // and no more, while the pipe stays open
		written <- err
	}()
	out := filepath.Join(t.TempDir(), "results")
	status, _, stderr := runPipe(t, stalled, rigFile, "--encoding", "f32", "--blocks", "5", "--out", out)
	if status != exitDone || readJSON(t, filepath.Join(out, "summary.json"))["blocks_averaged"] != 5.0 {
		t.Errorf("exit status %d, %q", status, stderr)
	}
	stalled.Close()
	<-written
}

func TestLiveThatCannotBegin(t *testing.T) {
	rigFile := pipeRig(t, "two_forces_hann")
	taken := filepath.Join(t.TempDir(), "taken.wav")
	if err := os.WriteFile(taken, []byte("mine"), 0o644); err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(t.TempDir(), "results")
	for _, test := range []struct {
		name string
		args []string
		want string
	}{
		{"no encoding", nil, "--encoding: it is missing"},
		{"unknown encoding", []string{"--encoding", "u8"}, "s16"},
		{"recording exists", []string{"--encoding", "f32", "--record", taken}, "taken.wav"},
		{"reopen a pipe", []string{"--encoding", "f32", "--reopen"}, "--reopen"},
		{"record and not", []string{"--encoding", "f32", "--record", "x.wav", "--no-record"}, "--record"},
		{"record a setup check", []string{"--encoding", "f32", "--record", "x.wav", "--setup"}, "--setup"},
	} {
		t.Run(test.name, func(t *testing.T) {
			status, _, stderr := runPipe(t, strings.NewReader(""), append([]string{rigFile, "--out", out}, test.args...)...)
			if status != exitUnusable || strings.Count(stderr, "\n") != 1 || !strings.Contains(stderr, test.want) {
				t.Errorf("exit status %d, %q: want 2 and one line with %q", status, stderr, test.want)
			}
			if _, err := os.Stat(out); err == nil {
				t.Error("a folder is left behind")
			}
		})
	}
	if text, _ := os.ReadFile(taken); string(text) != "mine" {
		t.Error("a file that was there was overwritten")
	}
}

func TestNoRecording(t *testing.T) {
	t.Parallel()
	rigFile := pipeRig(t, "two_forces_hann")
	_, recording := caseFiles("two_forces_hann")
	raw := rawFrames(t, recording, "f32")
	out := filepath.Join(t.TempDir(), "results")
	if status, _, stderr := runPipe(t, bytes.NewReader(raw), rigFile, "--encoding", "f32", "--out", out, "--no-record"); status != exitDone {
		t.Fatalf("exit status %d: %s", status, stderr)
	}
	if _, err := os.Stat(filepath.Join(out, recordingFile)); err == nil {
		t.Error("there is a recording in spite of --no-record")
	}
}

// TestSetupCheck goes through all stages with the simulated rig, which turns its drives down by
// itself where a person would.
func TestSetupCheck(t *testing.T) {
	t.Parallel()
	out := filepath.Join(t.TempDir(), "check")
	path, err := builtProgram()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(path, "live", "../../acquire/demo/skid.toml", "--setup", "--headless", "--blocks", "9", "--out", out)
	cmd.Stdin = strings.NewReader("\n\n\n")
	text, err := cmd.CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	for _, want := range []string{"amplifiers muted", "amplifiers on at zero drive", "shakers on low", "emergency stop", "headroom", "noise-level", "power-flow"} {
		if !strings.Contains(string(text), want) {
			t.Errorf("nothing about %q in\n%s", want, text)
		}
	}
	flagged := regexp.MustCompile(`(?m)^(look|stop).*(polarity-suspect|dead-channel|twin-channels|not-driven|mains-hum|overrange).*$`)
	if wrong := flagged.Find(text); wrong != nil {
		t.Errorf("the simulated rig is in order, but it says: %s", wrong)
	}
	if len(readFile(t, out, "setup.txt")) == 0 {
		t.Error("setup.txt is empty")
	}
	file, err := os.Open(filepath.Join(out, "noise.npz"))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	info, err := file.Stat()
	if err != nil {
		t.Fatal(err)
	}
	noise, err := npz.NewReader(file, info.Size())
	if err != nil {
		t.Fatal(err)
	}
	for _, v := range readArray[float64](t, noise, "noise_response.npy")[200:300] {
		if !(v > 0 && v < 1e-3) {
			t.Errorf("a noise density of %v (m/s²)²/Hz", v)
		}
	}

	run := filepath.Join(t.TempDir(), "run")
	noiseFile := filepath.Join(out, "noise.npz")
	if status, _, stderr := shakerwatch(t, "--headless", "--blocks", "8", "--noise", noiseFile, "--out", run); status != exitDone {
		t.Fatalf("a run with the noise measurement: exit status %d, %s", status, stderr)
	}
	summary := readJSON(t, filepath.Join(run, "summary.json"))
	if noise, ok := summary["noise"].(map[string]any); !ok || noise["name"] != noiseFile || len(noise["sha256"].(string)) != 64 {
		t.Errorf("the summary says of the noise: %v", summary["noise"])
	}
}

func TestSetupCheckWithNobodyThere(t *testing.T) {
	out := filepath.Join(t.TempDir(), "check")
	status, stdout, _ := shakerwatch(t, "live", "../../acquire/demo/skid.toml", "--setup", "--headless", "--out", out)
	if status != exitDone || !strings.Contains(stdout, "nothing was measured") {
		t.Errorf("exit status %d, %q", status, stdout)
	}
	if _, err := os.Stat(out); err == nil {
		t.Error("a folder is left behind")
	}
}

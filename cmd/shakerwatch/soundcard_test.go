//go:build soundcard

package main

import (
	"bytes"
	"fmt"
	"math"
	"math/cmplx"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"

	"shakerwatch/acquire/demo"
	"shakerwatch/acquire/rig"
	"shakerwatch/acquire/soundcard/nullcard"
	"shakerwatch/acquire/wav"
)

// cardRig is a rig file of six channels of the simulated skid at a sound card's rate, which a
// decimator brings down to the band.
const cardRig = `
[source]
kind = "soundcard"
rate = 48000
full_scale = 5.0
channels = 6
[analysis]
max_frequency = 1000
min_frequency = 10
line_spacing = 2.0
`

// cardChannels are forces and responses at points of the simulated skid.
var cardChannels = []struct{ table, name, point, axis string }{
	{"force", "S1", "12", "+z"}, {"force", "S2", "3", "+z"},
	{"response", "A12z", "12", "+z"}, {"response", "A3z", "3", "-z"},
	{"response", "A1z", "1", "+z"}, {"response", "A6z", "6", "+z"},
}

// writeCardRig writes the rig file, for a source of the given kind.
func writeCardRig(t *testing.T, dir, kind string) string {
	t.Helper()
	var b strings.Builder
	b.WriteString(strings.Replace(cardRig, "soundcard", kind, 1))
	for i, c := range cardChannels {
		fmt.Fprintf(&b, "[[%s]]\nchannel = %d\nname = %q\npoint = %q\naxis = %q\nsensitivity = 0.0108\n", c.table, i+1, c.name, c.point, c.axis)
	}
	path := filepath.Join(dir, kind+".toml")
	if err := os.WriteFile(path, []byte(b.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

// recordSkid writes seconds of the simulated skid to a recording.
func recordSkid(t *testing.T, rigFile, path string, seconds int) {
	t.Helper()
	r, err := rig.Read(rigFile)
	if err != nil {
		t.Fatal(err)
	}
	source, err := demo.New(r, 5)
	if err != nil {
		t.Fatal(err)
	}
	w, err := wav.Create(path, source.RateHz(), source.Channels(), wav.Float32)
	if err != nil {
		t.Fatal(err)
	}
	second := make([]float64, int(source.RateHz())*source.Channels())
	for range seconds {
		source.Read(second)
		if err := w.Write(second); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
}

// builtWithSoundcard builds the program with sound cards.
func builtWithSoundcard(t *testing.T) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "shakerwatch")
	if out, err := exec.Command("go", "build", "-tags", "soundcard", "-o", path, ".").CombinedOutput(); err != nil {
		t.Fatalf("go build -tags soundcard: %v\n%s(it needs Debian's portaudio19-dev)", err, out)
	}
	return path
}

// TestSoundcard plays a recording into a sound device, watches it live, and compares with a replay of
// the recording. The capture begins at some frame of it, so the blocks are others: H must agree
// within its random error and the levels to 0.1 dB.
func TestSoundcard(t *testing.T) {
	dir := t.TempDir()
	program := builtWithSoundcard(t)
	rigFile := writeCardRig(t, dir, "soundcard")
	played := filepath.Join(dir, "played.wav")
	recordSkid(t, writeCardRig(t, dir, "demo"), played, 26)
	card := nullcard.Start(t, 6)

	list := exec.Command(program, "devices")
	list.Env = append(os.Environ(), card.Env()...)
	if out, err := list.CombinedOutput(); err != nil || !regexp.MustCompile(`(?m)^ALSA .*48000`).Match(out) {
		t.Errorf("devices: %v\n%s", err, out)
	}

	card.Play(t, played)
	time.Sleep(time.Second) // for the sink to be busy: what is captured before is silence
	live := filepath.Join(dir, "live")
	capture := exec.Command(program, "live", rigFile, "--headless", "--blocks", "60", "--out", live)
	capture.Env = append(os.Environ(), card.Env()...)
	if out, err := capture.CombinedOutput(); err != nil {
		t.Fatalf("live: %v\n%s", err, out)
	}
	summary := readJSON(t, filepath.Join(live, "summary.json"))
	if source := summary["source"].(map[string]any); summary["blocks_averaged"] != 60.0 || source["kind"] != "soundcard" {
		t.Fatalf("summary %v", summary)
	}

	replayed := filepath.Join(dir, "replayed")
	if status, _, stderr := shakerwatch(t, "replay", rigFile, played, "--headless", "--out", replayed); status != exitDone {
		t.Fatalf("replay: exit status %d: %s", status, stderr)
	}
	compareWithin(t, filepath.Join(live, "estimates.npz"), filepath.Join(replayed, "estimates.npz"))
	compareLevels(t, filepath.Join(live, "recording.wav"), played)

	again := filepath.Join(dir, "again")
	if status, _, stderr := shakerwatch(t, "replay", rigFile, filepath.Join(live, "recording.wav"), "--headless",
		"--only", filepath.Join(live, "summary.json"), "--out", again); status != exitDone {
		t.Fatalf("replay of what was recorded: exit status %d: %s", status, stderr)
	}
	if !bytes.Equal(readFile(t, again, "estimates.npz"), readFile(t, live, "estimates.npz")) {
		t.Error("a replay of what was recorded, over the same blocks, gives other bytes")
	}
}

// compareWithin compares two measurements of the same rig over different stretches of time.
func compareWithin(t *testing.T, onePath, otherPath string) {
	t.Helper()
	one, other := openNPZ(t, onePath), openNPZ(t, otherPath)
	h1, h2 := readArray[complex128](t, one, "H.npy"), readArray[complex128](t, other, "H.npy")
	e1, e2 := readArray[float64](t, one, "random_error.npy"), readArray[float64](t, other, "random_error.npy")
	const first = 6 // lines below are not judged
	frfs := (len(cardChannels) - 2) * 2
	outside, lines := 0, 0
	for at := first * frfs; at < len(h1); at++ {
		sd := math.Hypot(e1[at]*cmplx.Abs(h1[at]), e2[at]*cmplx.Abs(h2[at])) // of |H|; the blocks overlap, so this is too wide, if anything
		if cmplx.Abs(h1[at]-h2[at]) > 4*sd {
			outside++
		}
		lines++
	}
	// The squared deviation over its variance is near an exponential with mean 1, so exp(-8) of the
	// lines would lie beyond four deviations of |H|, 0.03 %.
	if outside > lines/200 {
		t.Errorf("%d of %d values of H differ by more than four standard deviations", outside, lines)
	}
}

// compareLevels finds where in the recording that was played a stretch of what was captured comes
// from, and compares the channels' levels over those same frames.
func compareLevels(t *testing.T, capturedPath, playedPath string) {
	t.Helper()
	n := len(cardChannels)
	captured, played := allFrames(t, capturedPath), allFrames(t, playedPath)
	const frames = 48_000
	stretch := captured[5*frames*n:][:frames*n]
	for at := 0; at+len(stretch) <= len(played); at += n {
		if !alike(stretch[:64*n], played[at:]) {
			continue
		}
		for ch := range n {
			var a, b float64
			for i := ch; i < len(stretch); i += n {
				a += stretch[i] * stretch[i]
				b += played[at+i] * played[at+i]
			}
			if db := 10 * math.Log10(a/b); !(math.Abs(db) < 0.1) {
				t.Errorf("channel %d: captured %.3f dB above what was played", ch+1, db)
			}
		}
		return
	}
	t.Error("a second of what was captured is nowhere in what was played")
}

// alike tells whether samples agree to a hundredth of full scale, all channels of 64 frames.
func alike(a, b []float64) bool {
	for i, v := range a {
		if math.Abs(v-b[i]) > 0.01 {
			return false
		}
	}
	return true
}

// TestSoundcardThatGoesAway: the sound server dies in the middle. Results are written, and the exit
// status says that something failed.
func TestSoundcardThatGoesAway(t *testing.T) {
	dir := t.TempDir()
	program := builtWithSoundcard(t)
	card := nullcard.Start(t, 6)
	live := filepath.Join(dir, "live")
	capture := exec.Command(program, "live", writeCardRig(t, dir, "soundcard"), "--headless", "--out", live)
	capture.Env = append(os.Environ(), card.Env()...)
	var text bytes.Buffer
	capture.Stdout, capture.Stderr = &text, &text
	if err := capture.Start(); err != nil {
		t.Fatal(err)
	}
	time.Sleep(4 * time.Second)
	card.Kill()
	ended := make(chan error, 1)
	go func() { ended <- capture.Wait() }()
	select {
	case <-ended:
	case <-time.After(15 * time.Second):
		capture.Process.Kill()
		t.Fatal("still running 15 s after the sound server died")
	}
	if status := capture.ProcessState.ExitCode(); status != exitFailed {
		t.Errorf("exit status %d, want 1: %s", status, text.String())
	}
	if summary := readJSON(t, filepath.Join(live, "summary.json")); summary["blocks_seen"].(float64) < 2 {
		t.Errorf("summary %v", summary)
	}
}

//go:build soundcard

package soundcard

import (
	"context"
	"errors"
	"io"
	"log/slog"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/gordonklaus/portaudio"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/soundcard/nullcard"
	"shakerwatch/acquire/wav"
)

const channels = 6

// A played sample tells its frame, from 1, and its channel: (8 frame + channel) / 2^24, which a
// float32 holds exactly below 1, for 43 s. Silence is 0.
const sampleStep = 1.0 / (1 << 24)

// play plays such samples for a time and waits for nothing.
func play(t *testing.T, card *nullcard.Card, channels int, length time.Duration) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "played.wav")
	w, err := wav.Create(path, nullcard.RateHz, channels, wav.Float32)
	if err != nil {
		t.Fatal(err)
	}
	frame := make([]float64, channels)
	for i := range int(length.Seconds() * nullcard.RateHz) {
		for c := range frame {
			frame[c] = float64(8*(i+1)+c) * sampleStep
		}
		w.Write(frame)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	card.Play(t, path)
}

// playedFrame is the frame that was played, 0 for silence. It fails when the channels are not in order.
func playedFrame(t *testing.T, frame []float64) int64 {
	t.Helper()
	first := int64(frame[0] / sampleStep)
	for c, v := range frame {
		if want := float64(first+int64(c)) * sampleStep; v != want && !(first == 0 && v == 0) {
			t.Fatalf("channel %d is %v, want %v: %v", c+1, v, want, frame)
		}
	}
	if first%8 != 0 {
		t.Fatalf("channel 1 is %v, which was never played there", frame[0])
	}
	return first / 8
}

func openDefault(t *testing.T, channels int) *Source {
	t.Helper()
	s, err := Open("", nullcard.RateHz, channels)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close() })
	return s
}

// balanced fails when PortAudio is still started.
func balanced(t *testing.T) {
	t.Helper()
	library.Lock()
	defer library.Unlock()
	if _, err := portaudio.Devices(); err != portaudio.NotInitialized {
		t.Errorf("PortAudio is still started: %v", err)
	}
}

func TestDevices(t *testing.T) {
	nullcard.Start(t, channels).Setenv(t)
	devices, err := Devices()
	if err != nil {
		t.Fatal(err)
	}
	balanced(t)
	i, err := Match(devices, "")
	if err != nil {
		t.Fatal(err)
	}
	d := devices[i]
	if d.HostAPI != "ALSA" || d.Name != "default" || d.Inputs < channels || d.Outputs < channels || d.DefaultRateHz <= 0 {
		t.Errorf("the default device is %+v", d)
	}
	if !slices.Contains(d.RatesHz, 44100) || !slices.Contains(d.RatesHz, 192000) || !slices.IsSorted(d.RatesHz) {
		t.Errorf("rates %v: a sound server converts to any", d.RatesHz)
	}
}

func TestOpenRefuses(t *testing.T) {
	nullcard.Start(t, channels).Setenv(t)
	for _, c := range []struct {
		name     string
		device   string
		rateHz   float64
		channels int
		want     []string
	}{
		{"unknown", "bridge", 48000, 2, []string{"no such device", `"bridge"`, `"ALSA: default"`, `"ALSA: pulse"`}},
		{"ambiguous", "alsa", 48000, 2, []string{"2 devices fit", `"alsa"`, `"ALSA: default"`, `"ALSA: pulse"`}},
		{"channels", "", 48000, 1000, []string{"1000 channels of 32", `"ALSA: default"`, "choose 1 to 32"}},
		{"no channel", "", 48000, 0, []string{"0 channels of 32", `"ALSA: default"`, "choose 1 to 32"}},
		{"rate", "PULSE", 1e6, 2, []string{"1e+06 frames/s", `"ALSA: pulse"`, "choose", "44100, 48000, "}},
	} {
		t.Run(c.name, func(t *testing.T) {
			s, err := Open(c.device, c.rateHz, c.channels)
			if err == nil {
				s.Close()
				t.Fatal("it opened")
			}
			for _, part := range c.want {
				if !strings.Contains(err.Error(), part) {
					t.Errorf("%v: want %s in it", err, part)
				}
			}
			balanced(t)
		})
	}
}

// Every sample comes through as it was played, in its channel, and none is missing.
func TestSamplesComeThrough(t *testing.T) {
	card := nullcard.Start(t, channels)
	card.Setenv(t)
	s := openDefault(t, channels)
	play(t, card, channels, 3*time.Second)
	dst := make([]float64, 1000*channels) // no multiple of a buffer
	next := int64(1)
	for next <= 2*nullcard.RateHz {
		n, err := s.Read(dst)
		if err != nil {
			t.Fatal(err)
		}
		for i := range n {
			frame := playedFrame(t, dst[i*channels:(i+1)*channels])
			if frame == 0 && next == 1 {
				continue
			}
			if next == 1 { // the server takes it up somewhere in the beginning
				next = frame
			}
			if frame != next {
				t.Fatalf("frame %d was played after %d", frame, next-1)
			}
			next++
		}
	}
	if err := s.Close(); err != nil {
		t.Error(err)
	}
	balanced(t)
}

func TestContractUntilClose(t *testing.T) {
	card := nullcard.Start(t, channels)
	card.Setenv(t)
	s := openDefault(t, channels)
	play(t, card, channels, 5*time.Second)
	time.AfterFunc(2*time.Second, func() { s.Close() })
	stretches, err := sourcetest.Drain(t, s, 4000)
	if err != io.EOF {
		t.Errorf("ended with %v", err)
	}
	if len(stretches) != 1 || len(stretches[0].Samples) == 0 {
		t.Errorf("%d stretches", len(stretches))
	}
	s.Close() // waits for the other
	balanced(t)
}

// endTime is within which a source must notice that its device is lost: the silence and as much
// again for a busy machine.
const endTime = 2 * silence

func TestServerKilled(t *testing.T) {
	card := nullcard.Start(t, channels)
	card.Setenv(t)
	s := openDefault(t, channels)
	if n, err := s.Read(make([]float64, channels)); n != 1 {
		t.Fatal(n, err)
	}
	card.Kill()
	killed := time.Now()
	_, err := sourcetest.Drain(t, s, 1000)
	if !errors.Is(err, ErrLost) || time.Since(killed) > endTime {
		t.Errorf("%v after %v", err, time.Since(killed))
	}
	t.Log(err)
	if err := s.Close(); err != nil {
		t.Error(err)
	}
	balanced(t)
}

// A server that hangs keeps PortAudio's functions for long. Read and Close do not wait for it.
func TestServerHangs(t *testing.T) {
	card := nullcard.Start(t, channels)
	card.Setenv(t)
	s := openDefault(t, channels)
	if n, err := s.Read(make([]float64, channels)); n != 1 {
		t.Fatal(n, err)
	}
	card.Freeze()
	frozen := time.Now()
	_, err := sourcetest.Drain(t, s, 1000)
	if !errors.Is(err, ErrLost) || time.Since(frozen) > endTime {
		t.Errorf("%v after %v", err, time.Since(frozen))
	}
	closing := time.Now()
	if err := s.Close(); err == nil || time.Since(closing) > 2*releaseTime {
		t.Errorf("Close gave %v after %v", err, time.Since(closing))
	}
	if n, again := s.Read(make([]float64, channels)); n != 0 || again.Error() != err.Error() {
		t.Errorf("Read after Close: %d, %v", n, again)
	}
	card.Thaw()
	balancedSoon(t)
}

// balancedSoon waits for a release that goes on behind Close.
func balancedSoon(t *testing.T) {
	t.Helper()
	for range 1000 {
		library.Lock()
		_, err := portaudio.Devices()
		library.Unlock()
		if err == portaudio.NotInitialized {
			return
		}
		time.Sleep(10 * time.Millisecond)
	}
	t.Error("PortAudio is still started")
}

// whenTold is a log that calls a function once, when a message is logged.
type whenTold struct {
	slog.Handler
	message string
	call    func()
}

func (w *whenTold) Enabled(context.Context, slog.Level) bool { return true }

func (w *whenTold) Handle(_ context.Context, r slog.Record) error {
	if r.Message == w.message && w.call != nil {
		w.call()
		w.call = nil
	}
	return nil
}

func TestReopeningAfterTheServer(t *testing.T) {
	card := nullcard.Start(t, channels)
	card.Setenv(t)
	ctx, cancel := context.WithCancelCause(t.Context())
	s, err := OpenReopening(ctx, "", nullcard.RateHz, channels, slog.New(&whenTold{
		message: "sound device not back yet",
		call: func() {
			card.Restart(t)
			play(t, card, channels, 10*time.Second)
		},
	}))
	if err != nil {
		t.Fatal(err)
	}
	defer s.Close()
	one := make([]float64, channels)
	if n, err := s.Read(one); n != 1 {
		t.Fatal(n, err)
	}
	card.Kill()
	killed := time.Now()
	var gap *acquire.GapError
	for !errors.As(err, &gap) {
		if _, err = s.Read(one); err != nil && !errors.As(err, &gap) {
			t.Fatal(err)
		}
	}
	away := time.Since(killed).Seconds() * nullcard.RateHz
	// It differs by what was in store on both sides: at most what was asked to be kept, and a look.
	if math.Abs(float64(gap.Frames)-away) > nullcard.RateHz*(latency.Seconds()+0.1) || away < nullcard.RateHz*retryInterval.Seconds() {
		t.Errorf("gap of %d frames, it was away for %.0f", gap.Frames, away)
	}
	for playedFrame(t, one) == 0 {
		if n, err := s.Read(one); n != 1 {
			t.Fatal(n, err)
		}
	}
	why := errors.New("enough")
	cancel(why)
	for err = nil; err == nil; {
		_, err = s.Read(one)
	}
	if err != why {
		t.Errorf("ended with %v", err)
	}
	if err := s.Close(); err != nil {
		t.Error(err)
	}
	balanced(t)
}

// halving leaves a part of what the sound server handed over where it is, which keeps the server's
// own thread in this program, and with it whoever asks for more, for good when the server is killed.
type halving struct{ card }

func (h halving) available() (int, bool, error) {
	n, overflow, err := h.card.available()
	return n / 2, overflow, err
}

// A function of the sound system that never returns keeps neither Read nor Close, nor a new Source
// from being opened. What hangs hangs for good, so this is a test in a program of its own.
func TestDriverHangs(t *testing.T) {
	const child = "SOUNDCARD_TEST_DRIVER_HANGS"
	if os.Getenv(child) == "" {
		program, err := os.Executable()
		if err != nil {
			t.Fatal(err)
		}
		cmd := exec.Command(program, "-test.run=^TestDriverHangs$", "-test.v")
		cmd.Env = append(os.Environ(), child+"=1")
		out, err := cmd.CombinedOutput()
		if err != nil || !strings.Contains(string(out), "--- PASS: TestDriverHangs") {
			t.Errorf("%v\n%s", err, out)
		}
		return
	}
	card := nullcard.Start(t, channels)
	card.Setenv(t)
	stream, label, err := openCard("", nullcard.RateHz, channels)
	if err != nil {
		t.Fatal(err)
	}
	s := newSource(t.Context(), halving{stream}, label, nullcard.RateHz, channels)
	one := make([]float64, channels)
	for range nullcard.RateHz / 2 {
		if n, err := s.Read(one); n != 1 {
			t.Fatal(n, err)
		}
	}
	card.Kill()
	killed := time.Now()
	_, err = sourcetest.Drain(t, s, 1000)
	if !errors.Is(err, ErrLost) || time.Since(killed) > endTime {
		t.Errorf("%v after %v", err, time.Since(killed))
	}
	closing := time.Now()
	err = s.Close()
	t.Logf("Close gave %v", err)
	if time.Since(closing) > 2*releaseTime {
		t.Errorf("Close took %v", time.Since(closing))
	}
	card.Restart(t)
	again := openDefault(t, channels)
	if n, err := again.Read(one); n != 1 {
		t.Errorf("opened again: %d, %v", n, err)
	}
	if err := again.Close(); err != nil {
		t.Error(err)
	}
}

// Nobody reads for longer than the sound server keeps frames: what it drops without a word is one
// gap, in its place and of its size.
func TestOverflow(t *testing.T) {
	const channels = 8 // the more, the sooner it is full: it keeps 4 MiB
	card := nullcard.Start(t, channels)
	card.Setenv(t)
	s := openDefault(t, channels)
	play(t, card, channels, 15*time.Second)
	dst := make([]float64, channels)
	var frame int64
	for frame == 0 {
		if n, err := s.Read(dst); n != 1 {
			t.Fatal(n, err)
		}
		frame = playedFrame(t, dst)
	}
	time.Sleep(4 * time.Second)
	var gap *acquire.GapError
	for gap == nil {
		n, err := s.Read(dst)
		if n == 0 && !errors.As(err, &gap) {
			t.Fatal(err)
		}
		if n == 1 {
			if played := playedFrame(t, dst); played != frame+1 {
				t.Fatalf("frame %d was played after %d, without a gap", played, frame)
			}
			frame++
		}
	}
	if n, err := s.Read(dst); n != 1 {
		t.Fatal(n, err)
	}
	lost := playedFrame(t, dst) - frame - 1
	t.Logf("%d frames were lost, the gap has %d", lost, gap.Frames)
	if math.Abs(float64(gap.Frames-lost)) > float64(nullcard.RateHz/readsPerSecond) {
		t.Errorf("%d frames were lost, the gap has %d", lost, gap.Frames)
	}
}

func TestReadAllocatesNothing(t *testing.T) {
	nullcard.Start(t, channels).Setenv(t)
	s := openDefault(t, channels)
	dst := make([]float64, nullcard.RateHz/readsPerSecond*channels)
	read := func() {
		if n, err := s.Read(dst); n == 0 {
			t.Fatal(err)
		}
	}
	read()
	if n := testing.AllocsPerRun(100, read); n != 0 {
		t.Errorf("%v allocations a Read", n)
	}
}

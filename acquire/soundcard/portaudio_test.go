//go:build soundcard && linux

package soundcard

import (
	"errors"
	"io"
	"math"
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
	i, err := match(devices, "")
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
		{"no number for a rate", "", math.NaN(), 2, []string{"NaN frames/s", `"ALSA: default"`, "choose", "44100, 48000, "}},
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
	play(t, card, channels, 2*time.Second)
	dst := make([]float64, 1000*channels) // no multiple of a buffer
	next := int64(1)
	for next <= nullcard.RateHz {
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
	time.AfterFunc(time.Second, func() { s.Close() })
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
	time.Sleep(3500 * time.Millisecond)
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
	// A frame or two hundred on an idle machine. On a busy one the server's lateness changes by a piece.
	if math.Abs(float64(gap.Frames-lost)) > nullcard.RateHz*tolerance.Seconds() {
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

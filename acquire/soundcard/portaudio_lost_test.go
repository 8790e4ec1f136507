//go:build soundcard && linux

package soundcard

import (
	"context"
	"errors"
	"log/slog"
	"math"
	"os"
	"os/exec"
	"strings"
	"testing"
	"time"

	"github.com/gordonklaus/portaudio"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/soundcard/nullcard"
)

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

//go:build soundcard && linux

// Package nullcard gives tests a sound device on a machine that has none: a sound server of its own
// with a sink that goes nowhere, whose monitor is the default input of PortAudio, by way of ALSA. It
// is for tests only.
//
// It knows the sound server. It may not know who captures.
//
// It needs Debian's pulseaudio, pulseaudio-utils and libasound2-plugins.
package nullcard

import (
	"bytes"
	"fmt"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// RateHz is the only rate at which samples come through as they were played.
const RateHz = 48000

// A Card is a sound server with one sink. It ends with the test.
type Card struct {
	dir      string
	channels int
	server   *exec.Cmd
	said     *bytes.Buffer // by the server; to be read when it has ended
}

// positions are those of the channels, by number of channels. They are ALSA's own, since any others
// would be mixed into them or come through as silence.
var positions = map[int]string{
	1: "mono",
	2: "front-left,front-right",
	4: "front-left,front-right,rear-left,rear-right",
	5: "front-left,front-right,rear-left,rear-right,front-center",
	6: "front-left,front-right,rear-left,rear-right,front-center,lfe",
	8: "front-left,front-right,rear-left,rear-right,front-center,lfe,side-left,side-right",
}

const (
	// startTime is how long a server may take; a tenth of a second is usual.
	startTime = 20 * time.Second

	// idleS ends a server that a killed test left behind, once nobody has used it for so long.
	idleS = 60
)

// Start makes a card of 1, 2, 4, 5, 6 or 8 channels and waits until it is there. A program sees
// it through the environment of Env, the test itself after Setenv.
func Start(t testing.TB, channels int) *Card {
	t.Helper()
	if positions[channels] == "" {
		t.Fatalf("a card of %d channels: choose 1, 2, 4, 5, 6 or 8", channels)
	}
	for _, program := range []string{"pulseaudio", "paplay"} {
		if _, err := exec.LookPath(program); err != nil {
			t.Fatalf("%v: install Debian's pulseaudio, pulseaudio-utils and libasound2-plugins", err)
		}
	}
	dir, err := os.MkdirTemp("", "nullcard") // not t.TempDir, whose path may be too long for a socket
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { os.RemoveAll(dir) })
	c := &Card{dir: dir, channels: channels}
	c.write(t, "daemon.conf", "enable-remixing = no\ndefault-sample-format = float32le\n"+
		fmt.Sprintf("default-sample-rate = %d\nexit-idle-time = %d\n", RateHz, idleS))
	c.write(t, "client.conf", "autospawn = no\n")
	c.write(t, "asound.conf", "</usr/share/alsa/alsa.conf>\npcm.!default { type pulse }\nctl.!default { type pulse }\n")
	t.Cleanup(c.Kill)
	c.Restart(t)
	return c
}

// Env is what a program that is to see the card needs in its environment, as in os.Environ.
func (c *Card) Env() []string {
	return []string{
		"PULSE_SERVER=unix:" + c.socket(),
		"PULSE_CLIENTCONFIG=" + c.path("client.conf"),
		"PULSE_RUNTIME_PATH=" + c.path("run"),
		"PULSE_STATE_PATH=" + c.path("state"),
		"ALSA_CONFIG_PATH=" + c.path("asound.conf"),
		"JACK_NO_START_SERVER=1",
	}
}

// Setenv puts Env into the environment of the test.
func (c *Card) Setenv(t testing.TB) {
	for _, entry := range c.Env() {
		name, value, _ := strings.Cut(entry, "=")
		t.Setenv(name, value)
	}
}

// Play starts to play a WAV file of as many channels as the card has and of RateHz, and returns the
// program that does so. It ends with the file, or with the test.
func (c *Card) Play(t testing.TB, file string) *exec.Cmd {
	t.Helper()
	play := exec.Command("paplay", "--device=null", "--no-remap", "--no-remix", file)
	play.Env = append(os.Environ(), c.Env()...)
	var said bytes.Buffer
	play.Stdout, play.Stderr = &said, &said
	if err := play.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		play.Process.Kill()
		play.Wait()
		if t.Failed() {
			t.Logf("paplay said: %s", &said)
		}
	})
	return play
}

// Kill ends the server at once, as if the device were pulled out. More than once does no harm.
func (c *Card) Kill() {
	if c.server == nil {
		return
	}
	c.server.Process.Kill()
	c.server.Wait()
	c.server = nil
}

// Freeze stops the server without ending it, and Thaw lets it go on.
func (c *Card) Freeze() { c.server.Process.Signal(syscall.SIGSTOP) }

// Thaw undoes Freeze.
func (c *Card) Thaw() { c.server.Process.Signal(syscall.SIGCONT) }

// Restart starts the server again after Kill.
func (c *Card) Restart(t testing.TB) {
	t.Helper()
	os.Remove(c.socket())
	c.said = new(bytes.Buffer)
	c.server = exec.Command("pulseaudio", "-n", "--daemonize=no", "--use-pid-file=no", "--log-target=stderr",
		"-L", fmt.Sprintf("module-null-sink sink_name=null norewinds=1 format=float32le rate=%d channels=%d channel_map=%s",
			RateHz, c.channels, positions[c.channels]),
		// Last, so that all is there when its socket is.
		"-L", "module-native-protocol-unix auth-anonymous=1 socket="+c.socket())
	c.server.Env = append(os.Environ(), append(c.Env(), "HOME="+c.dir, "PULSE_CONFIG="+c.path("daemon.conf"))...)
	c.server.Stdout, c.server.Stderr = c.said, c.said
	if err := c.server.Start(); err != nil {
		t.Fatal(err)
	}
	for end := time.Now().Add(startTime); ; time.Sleep(10 * time.Millisecond) {
		conn, err := net.Dial("unix", c.socket())
		if err == nil {
			conn.Close()
			return
		}
		if time.Now().After(end) {
			c.Kill()
			t.Fatalf("no sound server within %v: %v\n%s", startTime, err, c.said)
		}
	}
}

func (c *Card) socket() string { return c.path("socket") }

func (c *Card) path(name string) string { return filepath.Join(c.dir, name) }

func (c *Card) write(t testing.TB, name, text string) {
	t.Helper()
	if err := os.WriteFile(c.path(name), []byte(text), 0o600); err != nil {
		t.Fatal(err)
	}
}

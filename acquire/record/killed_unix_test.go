//go:build unix

package record

import (
	"bufio"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"os/signal"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"

	"go.uber.org/goleak"

	"shakerwatch/acquire/wav"
)

// This test program as a child that comes to a bad end: what it does, where, and how.
const (
	childTask = "SHAKERWATCH_RECORD_CHILD"
	childPath = "SHAKERWATCH_RECORD_PATH"
	childPace = "SHAKERWATCH_RECORD_REFRESH"
)

func TestMain(m *testing.M) {
	switch os.Getenv(childTask) {
	case "killed":
		recordUntilKilled()
	case "full":
		recordOnFullDisk()
	default:
		goleak.VerifyTestMain(m)
	}
}

func child(t *testing.T, task, path string, env ...string) (*exec.Cmd, *bufio.Scanner) {
	t.Helper()
	c := exec.CommandContext(t.Context(), os.Args[0])
	c.Env = append(os.Environ(), append(env, childTask+"="+task, childPath+"="+path)...)
	c.Stderr = os.Stderr
	out, err := c.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	return c, bufio.NewScanner(out)
}

const childChannels = 4

// A ramp is a source of counting frames without end.
type ramp struct{ next int64 }

func (*ramp) RateHz() float64 { return 48000 }
func (*ramp) Channels() int   { return childChannels }
func (r *ramp) Read(dst []float64) (int, error) {
	n := copy(dst, counting(childChannels, r.next, int64(len(dst)/childChannels))) / childChannels
	r.next += int64(n)
	return n, nil
}

// announcing says after each refresh how many frames the file holds from now on.
type announcing struct{ *wav.Writer }

func (a announcing) RefreshHeader() error {
	err := a.Writer.RefreshHeader()
	fmt.Println("kept", a.Frames())
	return err
}

// recordUntilKilled captures in real time and says how far it is.
func recordUntilKilled() {
	refresh, err := time.ParseDuration(os.Getenv(childPace))
	if err != nil {
		fmt.Println(err)
		return
	}
	source := new(ramp)
	o := Options{RateHz: source.RateHz(), Channels: childChannels, Encoding: wav.Float32}
	w, err := wav.Create(os.Getenv(childPath), o.RateHz, o.Channels, o.Encoding)
	if err != nil {
		fmt.Println(err)
		return
	}
	r := start("run.wav", announcing{w}, o, queueFrames(o.RateHz, o.Channels), refresh)
	s := Tee(source, r)
	dst := make([]float64, 960*childChannels) // 20 ms
	for tick := time.NewTicker(20 * time.Millisecond); ; <-tick.C {
		s.Read(dst)
		fmt.Println("captured", source.next)
	}
}

// A recorder that is killed leaves a file with all frames up to its last refresh, and all it holds
// is right. That refreshes come every second is another test's matter.
func TestKilled(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	for i := range 12 {
		refresh, reads := "1ms", 2+random.IntN(20) // so that some are killed while they refresh
		if i < 3 {
			refresh, reads = refreshInterval.String(), 40+random.IntN(60)
		}
		path := filepath.Join(t.TempDir(), "run.wav")
		c, lines := child(t, "killed", path, childPace+"="+refresh)
		var kept, captured int64
		for seen := 0; lines.Scan(); {
			var n int64
			switch _, err := fmt.Sscanf(lines.Text(), "captured %d", &n); {
			case err == nil:
				captured = n
				seen++
			default:
				if _, err := fmt.Sscanf(lines.Text(), "kept %d", &kept); err != nil {
					t.Fatalf("the child says %s", lines.Text())
				}
			}
			if seen == reads {
				if err := c.Process.Kill(); err != nil {
					t.Fatal(err)
				}
				seen++
			}
		}
		c.Wait() // says that it was killed
		if status := c.ProcessState.Sys().(syscall.WaitStatus); status.Signal() != syscall.SIGKILL {
			t.Fatalf("the child ended by %v", c.ProcessState)
		}
		recording, err := wav.Open(path)
		if err != nil {
			if kept > 0 || !strings.Contains(err.Error(), "no frames") {
				t.Errorf("killed after %d reads with %d frames kept: %v", reads, kept, err)
			}
			continue
		}
		if recording.Frames() < kept {
			t.Errorf("killed after %d reads: %d frames in the file, %d were kept", reads, recording.Frames(), kept)
		}
		equal(t, everything(t, recording), counting(childChannels, 0, recording.Frames()))
		recording.Close()
		t.Logf("refresh %s, killed after %d reads: lost %.3f s of %.3f s", refresh, reads,
			float64(captured-recording.Frames())/48000, float64(captured)/48000)
	}
}

const fullDisk = 300_007 // bytes; on purpose no whole number of frames or of the writer's buffers

// recordOnFullDisk captures more than the system lets into a file, and says how that ended.
func recordOnFullDisk() {
	signal.Ignore(syscall.SIGXFSZ) // so that writing is an error, as on a full disk
	limit := syscall.Rlimit{Cur: fullDisk, Max: fullDisk}
	if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &limit); err != nil {
		fmt.Println(err)
		return
	}
	source := new(ramp)
	o := Options{RateHz: source.RateHz(), Channels: childChannels, Encoding: wav.Float32,
		OnError: func(err error) { fmt.Println("reported", err) }}
	r, err := Create(os.Getenv(childPath), o)
	if err != nil {
		fmt.Println(err)
		return
	}
	s := Tee(source, r)
	dst := make([]float64, 960*childChannels)
	for range 100 {
		if n, err := s.Read(dst); n != 960 || err != nil {
			fmt.Println("the capture stopped", n, err)
		}
	}
	fmt.Println("closed", r.Close())
}

func TestFullDisk(t *testing.T) {
	path := filepath.Join(t.TempDir(), "run.wav")
	c, lines := child(t, "full", path)
	var said []string
	for lines.Scan() {
		said = append(said, lines.Text())
	}
	if err := c.Wait(); err != nil {
		t.Error(err)
	}
	recording := open(t, path)
	// The writer hands 64 KiB to the system at a time; os.File.WriteAt does not say how much of the last
	// was written before the error.
	const handed = 1 << 16
	frames := recording.Frames()
	if frames > fullDisk/16 || frames < (fullDisk-2*handed)/16 || len(recording.Warnings()) > 0 {
		t.Errorf("%d frames, warnings %q; want about as many as fit into %d bytes, none", frames, recording.Warnings(), fullDisk)
	}
	equal(t, everything(t, recording), counting(childChannels, 0, frames))
	text := fmt.Sprintf("%s: recording stopped after frame %d: file too large: check the space on the disk and its cable", path, frames)
	if want := "reported " + text + "\nclosed " + text; strings.Join(said, "\n") != want {
		t.Errorf("the child says\n%s\nwant\n%s", strings.Join(said, "\n"), want)
	}
}

// A device in the place of the file is no file to record into, and stays.
func TestReplaceNoDevice(t *testing.T) {
	path := filepath.Join(t.TempDir(), "fifo")
	if err := syscall.Mkfifo(path, 0o600); err != nil {
		t.Fatal(err)
	}
	o := options(1, wav.Float32)
	o.Replace = true
	_, err := Create(path, o)
	if want := path + ": is no regular file: give the name of one"; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
	if _, err := os.Lstat(path); err != nil {
		t.Error(err)
	}
}

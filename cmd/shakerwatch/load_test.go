package main

import (
	"bytes"
	"encoding/binary"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"

	"shakerwatch/acquire/decimate"
	"shakerwatch/acquire/pipe"
	"shakerwatch/acquire/rig"
	"shakerwatch/cmd/internal/monitor"
	"shakerwatch/estimate/watch"
)

var loadTime = flag.Duration("load", 5*time.Second, "how long each of TestLoad and TestLatency runs; 10m for the figures of DEVELOPERS.md")

// The load: 4 forces and 60 responses at 48 kHz.
const (
	loadForces   = 4
	loadChannels = 64
	loadRateHz   = 48_000
)

// loads are decimated ones, with blocks of 5400, and ones at the full rate, with blocks of 4096.
var loads = []struct {
	name                  string
	bandHz, lineSpacingHz float64
}{
	{"1kHz", 1_000, 0.5},
	{"18kHz", 18_000, loadRateHz / 4096.},
}

// TestLoad has a simulated device of 64 channels at 48 kHz send frames through a pipe in real time,
// recorded on the way. No frame and no block may be lost. It prints the share of one core and the
// memory that the program takes. To repeat its figures and those of TestLatency:
//
//	go test ./cmd/shakerwatch -run 'TestLoad|TestLatency' -count=1 -v -timeout 15m -args -load 60s
func TestLoad(t *testing.T) {
	for _, l := range loads {
		t.Run(l.name, func(t *testing.T) { testLoad(t, l.bandHz, l.lineSpacingHz) })
	}
}

func testLoad(t *testing.T, bandHz, lineSpacingHz float64) {
	dir := t.TempDir()
	out := filepath.Join(dir, "results")
	path, err := builtProgram()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(path, "live", loadRig(t, dir, bandHz, lineSpacingHz), "--headless", "--encoding", "f32", "--out", out, "--record", filepath.Join(dir, "run.wav"))
	var text bytes.Buffer
	cmd.Stdout, cmd.Stderr = &text, &text
	stdin, err := cmd.StdinPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	next := loadNoise()
	start := time.Now()
	var early, late float64
	for n := range *loadTime / hundredth {
		awaitTick(start, n)
		if _, err := stdin.Write(next()); err != nil {
			t.Fatal(err)
		}
		if late = residentMiB(t, cmd.Process.Pid); time.Since(start) < *loadTime/4 {
			early = late
		}
	}
	took := time.Since(start)
	stdin.Close()
	if err := cmd.Wait(); err != nil {
		t.Fatalf("%v\n%s", err, text.String())
	}
	usage := cmd.ProcessState.SysUsage().(*syscall.Rusage)
	cpu := time.Duration(usage.Utime.Nano() + usage.Stime.Nano())
	summary := readJSON(t, filepath.Join(out, "summary.json"))
	t.Logf("%v of 64 channels at 48 kHz, band %g Hz: %.0f blocks averaged, %.1f %% of one core, %.0f MiB resident after a quarter, %.0f MiB in the end, %d MiB at most",
		took.Round(time.Second), bandHz, summary["blocks_averaged"], 100*cpu.Seconds()/took.Seconds(), early, late, usage.Maxrss>>10)
	if summary["gaps"] != 0.0 || summary["blocks_set_aside"] != 0.0 || summary["blocks_averaged"].(float64) < 2 {
		t.Errorf("gaps %v, blocks set aside %v of %v", summary["gaps"], summary["blocks_set_aside"], summary["blocks_seen"])
	}
	if strings.Contains(text.String(), "lost to the disk") {
		t.Error(text.String())
	}
}

// TestLatency has the same frames come through a pipe into a pipeline of this process. No block may be lost,
// or averaged before all was there that it waits for: itself, the decimator's half length behind it and, once the watch
// judges, the blocks of its probation. It prints how long after its own last frame, and after the last one
// that it waits for, a block was in the average.
//
// The source counts as one that can wait, so that a machine that is too slow, as with -race, shows in
// the latency and loses nothing.
func TestLatency(t *testing.T) {
	for _, l := range loads {
		t.Run(l.name, func(t *testing.T) {
			r, err := rig.Read(loadRig(t, t.TempDir(), l.bandHz, l.lineSpacingHz))
			if err != nil {
				t.Fatal(err)
			}
			written, averaged := runLoad(t, r)
			fromLast, fromAwaited := latencies(t, r, written, averaged)
			slices.Sort(fromLast)
			slices.Sort(fromAwaited)
			n := len(fromAwaited)
			t.Logf("band %g Hz, blocks of %d, a hop of %.4g ms: %d blocks in the average %v after their last frame (median; at most %v), %v after the last frame that it waits for (90 %% within %v, at most %v)",
				l.bandHz, r.Grid.Block, 1e3*float64(r.Grid.Hop)/r.Grid.RateHz, n, fromLast[n/2].Round(100*time.Microsecond),
				fromLast[n-1].Round(100*time.Microsecond), fromAwaited[n/2].Round(10*time.Microsecond),
				fromAwaited[n*9/10].Round(10*time.Microsecond), fromAwaited[n-1].Round(10*time.Microsecond))
		})
	}
}

// Frames are written a hundredth of a second of them at a time.
const (
	hundredth  = time.Second / 100
	loadFrames = loadRateHz / 100
)

// awaitTick waits until n hundredths of a second after start and the one that a device takes to fill
// its buffer. A ticker would leave ticks out where the machine is slow.
func awaitTick(start time.Time, n time.Duration) {
	time.Sleep(time.Until(start.Add((n + 1) * hundredth)))
}

// runLoad runs the load for a while and returns when each hundredth of a second was written, and when each
// block was averaged.
func runLoad(t *testing.T, r *rig.Rig) (written, averaged []time.Time) {
	t.Helper()
	from, to, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	done := make(chan struct{})
	go func() {
		defer close(done)
		defer to.Close()
		next := loadNoise()
		start := time.Now()
		for n := range *loadTime / hundredth {
			awaitTick(start, n)
			written = append(written, time.Now())
			if _, err := to.Write(next()); err != nil {
				t.Error(err)
				return
			}
		}
	}()
	result, err := monitor.Run(t.Context(), monitor.Config{
		Rig:    r,
		Source: pipe.New(from, loadRateHz, loadChannels, pipe.F32),
		OnProgress: func(c monitor.Counts) {
			for int64(len(averaged)) < c.Averaged {
				averaged = append(averaged, time.Now())
			}
		},
	})
	from.Close()
	<-done
	if err != nil {
		t.Fatal(err)
	}
	if result.Gaps != 0 || result.SetAside != 0 {
		t.Fatalf("gaps %d, blocks set aside %d of %d", result.Gaps, result.SetAside, result.Seen)
	}
	return written, averaged
}

// latencies are how long after its last frame, and after the last one that it waits for, each block was
// averaged. Blocks that the end let go are left out.
func latencies(t *testing.T, r *rig.Rig, written, averaged []time.Time) (fromLast, fromAwaited []time.Duration) {
	t.Helper()
	d := r.Grid.Decimation
	unjudged := watchArms(len(r.Forces))
	for k, at := range averaged {
		last := (k*r.Grid.Hop+r.Grid.Block)*d - 1
		awaited := last + decimate.HalfLength(d)
		if k >= unjudged {
			awaited += watch.Delay(r) * r.Grid.Hop * d
		}
		if awaited/loadFrames >= len(written) {
			break
		}
		if at.Before(written[awaited/loadFrames]) {
			t.Errorf("block %d was averaged before a frame that it waits for", k)
		}
		fromLast = append(fromLast, at.Sub(written[last/loadFrames]))
		fromAwaited = append(fromAwaited, at.Sub(written[awaited/loadFrames]))
	}
	if len(fromLast) < 2 {
		t.Fatalf("%d blocks averaged before the end", len(fromLast))
	}
	return fromLast, fromAwaited
}

// watchArms is how many blocks are averaged at once: the watch judges only with so many in the
// average (README.md, Blocks set aside).
func watchArms(forces int) int { return max(8, 3*forces) }

// loadRig writes the rig file of the load.
func loadRig(t *testing.T, dir string, bandHz, lineSpacingHz float64) string {
	t.Helper()
	var b strings.Builder
	fmt.Fprintf(&b, "[source]\nkind = \"pipe\"\nrate = %d\n[analysis]\nmax_frequency = %g\nline_spacing = %g\n", loadRateHz, bandHz, lineSpacingHz)
	for ch := 1; ch <= loadChannels; ch++ {
		table, axis := "response", "+z"
		if ch <= loadForces {
			table = "force"
		}
		fmt.Fprintf(&b, "[[%s]]\nchannel = %d\nname = \"C%d\"\npoint = \"%d\"\naxis = %q\nsensitivity = 0.01\n", table, ch, ch, ch, axis)
	}
	path := filepath.Join(dir, "rig.toml")
	if err := os.WriteFile(path, []byte(b.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

// loadNoise gives made-up noise, a hundredth of a second at a time: pieces from anywhere in a second of it, because
// what repeats is no noise to blocks that are longer.
func loadNoise() func() []byte {
	const frameBytes = 4 * loadChannels
	rng := rand.New(rand.NewPCG(1, 2))
	raw := make([]byte, 0, frameBytes*loadRateHz)
	for range loadChannels * loadRateHz {
		raw = binary.LittleEndian.AppendUint32(raw, math.Float32bits(float32(rng.Float64()-0.5)))
	}
	return func() []byte {
		return raw[frameBytes*rng.IntN(loadRateHz-loadFrames):][:frameBytes*loadFrames]
	}
}

// residentMiB is the memory of a process that is in use.
func residentMiB(t *testing.T, pid int) float64 {
	t.Helper()
	text, err := os.ReadFile(fmt.Sprintf("/proc/%d/statm", pid))
	if err != nil {
		t.Fatal(err)
	}
	pages, err := strconv.Atoi(strings.Fields(string(text))[1])
	if err != nil {
		t.Fatal(err)
	}
	return float64(pages*os.Getpagesize()) / (1 << 20)
}

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
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"
)

var loadTime = flag.Duration("load", 8*time.Second, "how long each of TestLoad and TestLatency runs; 10m for the figures of DEVELOPERS.md")

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
// memory that the program takes.
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
	second := loadSecond()
	ticks := time.NewTicker(time.Second / 100)
	defer ticks.Stop()
	start := time.Now()
	var early, late float64
	for n := 0; time.Since(start) < *loadTime; n++ {
		<-ticks.C
		hundredth := len(second) / 100
		if _, err := stdin.Write(second[n%100*hundredth : (n%100+1)*hundredth]); err != nil {
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

// loadSecond is a second of made-up noise.
func loadSecond() []byte {
	rng := rand.New(rand.NewPCG(1, 2))
	raw := make([]byte, 0, 4*loadChannels*loadRateHz)
	for range loadChannels * loadRateHz {
		raw = binary.LittleEndian.AppendUint32(raw, math.Float32bits(float32(rng.Float64()-0.5)))
	}
	return raw
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

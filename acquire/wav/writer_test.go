package wav

import (
	"errors"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func mustCreate(t testing.TB, path string, channels int, e Encoding) *Writer {
	t.Helper()
	w, err := Create(path, testRate, channels, e)
	if err != nil {
		t.Fatal(err)
	}
	return w
}

// samplesOf reads the file at path as it is now.
func samplesOf(t testing.TB, path string) ([]float64, *Reader) {
	t.Helper()
	r, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	return drain(t, r), r
}

func TestCreateRefuses(t *testing.T) {
	dir := t.TempDir()
	taken := filepath.Join(dir, "taken.wav")
	if err := os.WriteFile(taken, []byte("precious"), 0o600); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(dir, "run.wav")
	for _, c := range []struct {
		name     string
		path     string
		rateHz   float64
		channels int
		e        Encoding
		want     string
	}{
		{"integers", path, 48000, 2, PCM24, "PCM 24 bit is not written: choose IEEE float 32 or 64 bit"},
		{"no encoding", path, 48000, 2, 0, "encoding 0 is not written: choose IEEE float 32 or 64 bit"},
		{"rate with a fraction", path, 44100.5, 2, Float32, "rate of 44100.5 frames/s: a WAV header holds whole numbers from 1 on, choose one"},
		{"rate 0", path, 0, 2, Float32, "rate of 0 frames/s: a WAV header holds whole numbers from 1 on, choose one"},
		{"rate NaN", path, math.NaN(), 2, Float32, "rate of NaN frames/s: a WAV header holds whole numbers from 1 on, choose one"},
		{"rate infinite", path, math.Inf(1), 2, Float32, "rate of +Inf frames/s: a WAV header holds whole numbers from 1 on, choose one"},
		{"rate of 33 bits", path, 1 << 32, 2, Float32, "rate of 4.294967296e+09 frames/s: a WAV header holds whole numbers from 1 on, choose one"},
		{"no channels", path, 48000, 0, Float32, "0 channels: a WAV file of IEEE float 32 bit holds 1 to 16383, choose fewer"},
		{"too many channels", path, 48000, 8192, Float64, "8192 channels: a WAV file of IEEE float 64 bit holds 1 to 8191, choose fewer"},
		{"too many bytes per second", path, 1 << 29, 2, Float32, "5.36870912e+08 frames/s of 2 channels: a WAV header holds less than 4 GiB/s, choose less"},
		{"exists", taken, 48000, 2, Float32, "file exists: choose another name, or move it away"},
		{"no such folder", filepath.Join(dir, "none", "run.wav"), 48000, 2, Float32, "no such file or directory: check the folder and its permissions"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := Create(c.path, c.rateHz, c.channels, c.e)
			if err == nil || err.Error() != c.path+": "+c.want {
				t.Errorf("error is\n%v\nwant\n%s: %s", err, c.path, c.want)
			}
		})
	}
	if text, err := os.ReadFile(taken); err != nil || string(text) != "precious" {
		t.Errorf("the file that existed holds %q, %v", text, err)
	}
	if _, err := os.Stat(path); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a file was left behind: %v", err)
	}
	if _, err := Create(taken, 48000, 1, Float32); !errors.Is(err, fs.ErrExist) {
		t.Errorf("error is %v, want fs.ErrExist inside", err)
	}
}

func TestWriterRoundTrip(t *testing.T) {
	for _, e := range []Encoding{Float32, Float64} {
		for _, channels := range []int{1, 2, 3, 64} {
			for name, maxRIFF := range map[string]uint64{"RIFF": largestRIFF, "RF64": 1000} {
				t.Run(e.String()+"/"+name, func(t *testing.T) {
					_, want := pattern(e, 3000*channels)
					path := filepath.Join(t.TempDir(), "run.wav")
					w := mustCreate(t, path, channels, e)
					w.maxRIFF = maxRIFF
					for piece := range slices.Chunk(want, 37*channels) {
						if err := w.Write(piece); err != nil {
							t.Fatal(err)
						}
					}
					if err := w.Close(); err != nil {
						t.Fatal(err)
					}
					got, r := samplesOf(t, path)
					sameBits(t, got, want)
					if r.Encoding() != e || r.Channels() != channels || r.RateHz() != testRate || len(r.Warnings()) > 0 || w.Frames() != 3000 {
						t.Errorf("%v, %d channels, %v frames/s, %q, %d frames", r.Encoding(), r.Channels(), r.RateHz(), r.Warnings(), w.Frames())
					}
					if content, err := os.ReadFile(path); err != nil || string(content[:4]) != name {
						t.Errorf("file begins with %q, %v; want %s", content[:4], err, name)
					}
				})
			}
		}
	}
}

func TestFloat32Rounds(t *testing.T) {
	m := &memory{limit: math.MaxInt}
	w := onMemory(t, m, 1, Float32)
	// To nearest even: 1 + 2^-24 lies halfway between 1 and the next float32, 1 + 2^-23.
	w.Write([]float64{1 + 0x1p-24, 1 + 0x1.8p-24, 1e39, -1e39, math.NaN()})
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	got := drain(t, mustRead(t, m.content))
	sameBits(t, got[:4], []float64{1, 1 + 0x1p-23, math.Inf(1), math.Inf(-1)})
	if !math.IsNaN(got[4]) {
		t.Errorf("NaN became %v", got[4])
	}
}

// What a process leaves behind that is killed at some moment: the file as it is, without Close.
func TestKilled(t *testing.T) {
	_, want := pattern(Float32, 2*60_000)
	path := filepath.Join(t.TempDir(), "run.wav")
	w := mustCreate(t, path, 2, Float32)
	write := func(from, to int) {
		t.Helper()
		if err := w.Write(want[2*from : 2*to]); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := Open(path); err == nil || !strings.Contains(err.Error(), "no frames") {
		t.Errorf("nothing written: %v, want no frames", err)
	}
	// 64 KiB of 8-byte frames are 8192 frames; 20,000 frames are two of these and some.
	write(0, 20_000)
	got, r := samplesOf(t, path)
	sameBits(t, got, want[:2*2*8192])
	if len(r.Warnings()) != 1 {
		t.Errorf("before the first refresh: warnings %q, want one", r.Warnings())
	}
	for _, to := range []int{20_000, 20_001, 50_000} {
		write(int(w.Frames()), to)
		if err := w.RefreshHeader(); err != nil {
			t.Fatal(err)
		}
		if to == 20_001 {
			w.maxRIFF = 300_000 // between 20,001 and 50,000 frames it becomes RF64
		}
		got, r := samplesOf(t, path)
		sameBits(t, got, want[:2*to])
		if len(r.Warnings()) != 0 {
			t.Errorf("after a refresh: warnings %q, want none", r.Warnings())
		}
	}
	write(50_000, 60_000)
	got, _ = samplesOf(t, path)
	sameBits(t, got, want[:2*50_000])
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	got, _ = samplesOf(t, path)
	sameBits(t, got, want)
	if content, err := os.ReadFile(path); err != nil || string(content[:4]) != "RF64" {
		t.Errorf("file begins with %q, %v; want RF64", content[:4], err)
	}
}

func TestWritePanicsOnShape(t *testing.T) {
	w := onMemory(t, &memory{limit: math.MaxInt}, 2, Float32)
	defer func() {
		if text, ok := recover().(string); !ok || !strings.HasPrefix(text, "wav: ") {
			t.Errorf("recovered %q, want a panic of this package", text)
		}
	}()
	w.Write(make([]float64, 3))
}

func TestWriteAllocatesNothing(t *testing.T) {
	for _, e := range []Encoding{Float32, Float64} {
		w := mustCreate(t, filepath.Join(t.TempDir(), "run.wav"), 3, e)
		frames := make([]float64, 3*1000)
		if n := testing.AllocsPerRun(50, func() {
			if err := w.Write(frames); err != nil {
				t.Fatal(err)
			}
		}); n != 0 {
			t.Errorf("%v: %v allocations a Write, want 0", e, n)
		}
		if n := testing.AllocsPerRun(3, func() {
			if err := w.RefreshHeader(); err != nil {
				t.Fatal(err)
			}
		}); n != 0 {
			t.Errorf("%v: %v allocations a RefreshHeader, want 0", e, n)
		}
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
	}
}

// A real file beyond 4 GiB, most of it a hole that takes no space on the disk.
func TestBeyond4GiB(t *testing.T) {
	const (
		channels = 3
		hole     = 4<<30/24 - 2 // frames of 3 channels of 8 bytes
	)
	path := filepath.Join(t.TempDir(), "long.wav")
	w := mustCreate(t, path, channels, Float64)
	w.bytes = hole * channels * 8 // as if that much had been written
	_, want := pattern(Float64, 1000*channels)
	if err := errors.Join(w.Write(want), w.Close()); err != nil {
		t.Fatal(err)
	}
	r, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	if r.Frames() != hole+1000 || len(r.Warnings()) > 0 {
		t.Errorf("%d frames, warnings %q; want %d, none", r.Frames(), r.Warnings(), hole+1000)
	}
	head := make([]byte, 4)
	if _, err := r.r.ReadAt(head, 0); err != nil || string(head) != "RF64" {
		t.Errorf("file begins with %q, %v; want RF64", head, err)
	}
	r.next = hole
	dst := make([]float64, 1001*channels)
	n, err := r.Read(dst)
	if n != 1000 || err != nil {
		t.Fatalf("Read = %d, %v; want 1000 frames", n, err)
	}
	sameBits(t, dst[:1000*channels], want)

	// The same file as a recorder leaves it that was killed before its first refresh.
	f, err := os.OpenFile(path, os.O_WRONLY, 0)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := f.WriteAt(appendHeader(nil, w.format, 0, largestRIFF), 0); err != nil {
		t.Fatal(err)
	}
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
	killed, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer killed.Close()
	if killed.Frames() != hole+1000 || len(killed.Warnings()) != 1 {
		t.Errorf("%d frames, warnings %q; want %d, one", killed.Frames(), killed.Warnings(), hole+1000)
	}
}

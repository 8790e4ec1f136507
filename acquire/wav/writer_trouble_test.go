package wav

import (
	"errors"
	"io/fs"
	"math"
	"os"
	"slices"
	"strings"
	"syscall"
	"testing"
)

// memory is a file of at most limit bytes that remembers what was done to it.
type memory struct {
	content  []byte
	limit    int
	did      []string
	syncErr  error
	wrote0   error // what writing at 0 says from now on
	closeErr error
}

func (m *memory) WriteAt(p []byte, off int64) (int, error) {
	what := "samples"
	if off == 0 {
		what = "header"
	}
	m.did = append(m.did, what)
	if off == 0 && m.wrote0 != nil {
		return 0, m.wrote0
	}
	n := min(len(p), max(0, m.limit-int(off)))
	if grow := int(off) + n - len(m.content); grow > 0 {
		m.content = append(m.content, make([]byte, grow)...)
	}
	copy(m.content[off:], p[:n])
	if n < len(p) {
		return n, &fs.PathError{Op: "write", Path: "run.wav", Err: syscall.ENOSPC}
	}
	return n, nil
}

func (m *memory) Truncate(size int64) error {
	m.did = append(m.did, "truncate")
	m.content = m.content[:size]
	return nil
}

func (m *memory) Sync() error  { m.did = append(m.did, "sync"); return m.syncErr }
func (m *memory) Close() error { m.did = append(m.did, "close"); return m.closeErr }

func onMemory(t testing.TB, m *memory, channels int, e Encoding) *Writer {
	t.Helper()
	f, err := writable(testRate, channels, e)
	if err != nil {
		t.Fatal(err)
	}
	w, err := newWriter(m, "run.wav", f)
	if err != nil {
		t.Fatal(err)
	}
	return w
}

func TestCreateOnFullDisk(t *testing.T) {
	f, err := writable(testRate, 1, Float32)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := newWriter(&memory{limit: 10}, "run.wav", f); !errors.Is(err, syscall.ENOSPC) ||
		err.Error() != "run.wav: no space left on device: check the space on the disk" {
		t.Errorf("error is %v", err)
	}
}

// The disk has the samples before the header counts them.
func TestOrderOnDisk(t *testing.T) {
	m := &memory{limit: math.MaxInt}
	w := onMemory(t, m, 1, Float64)
	w.Write([]float64{1})
	w.RefreshHeader()
	w.RefreshHeader()
	w.Write([]float64{2})
	w.Close()
	want := []string{"header", "samples", "sync", "header", "sync", "header", "samples", "sync", "header", "sync", "close"}
	if !slices.Equal(m.did, want) {
		t.Errorf("did\n%q\nwant\n%q", m.did, want)
	}
}

func TestDiskFull(t *testing.T) {
	const frames = 30_000 // of 3 channels of 4 bytes: 6 buffers
	_, want := pattern(Float32, 3*frames)
	header := headerBytes(format{encoding: Float32, channels: 3})
	for _, room := range []int{0, 1, 11, 12, 13, 65536, 100_007, 12*frames - 1} {
		m := &memory{limit: header + room}
		w := onMemory(t, m, 3, Float32)
		var first error
		for piece := range slices.Chunk(want, 3*100) {
			if err := w.Write(piece); err != nil && first == nil {
				first = err
			} else if err != first {
				t.Fatalf("room for %d bytes: Write says %v after %v", room, err, first)
			}
		}
		if err := w.RefreshHeader(); err != first && first != nil {
			t.Errorf("room for %d bytes: RefreshHeader says %v after %v", room, err, first)
		}
		tries := len(m.did)
		w.Write(want[:3])
		if len(m.did) != tries {
			t.Errorf("room for %d bytes: something was written after an error", room)
		}
		err := w.Close()
		if !errors.Is(err, syscall.ENOSPC) || !strings.HasPrefix(err.Error(), "run.wav: recording stopped after frame ") ||
			!strings.HasSuffix(err.Error(), ": no space left on device: check the space on the disk and its cable") {
			t.Errorf("room for %d bytes: Close says %v", room, err)
		}
		if m.did[len(m.did)-1] != "close" {
			t.Errorf("room for %d bytes: the file was not closed", room)
		}
		if room < 12 {
			if _, err := read(m.content); err == nil || !strings.Contains(err.Error(), "no frames") {
				t.Errorf("room for %d bytes: %v, want no frames", room, err)
			}
			continue
		}
		r := mustRead(t, m.content)
		sameBits(t, drain(t, r), want[:room/12*3])
		if len(r.Warnings()) > 0 || len(m.content) != header+room/12*12 {
			t.Errorf("room for %d bytes: warnings %q, file of %d bytes", room, r.Warnings(), len(m.content))
		}
	}
}

func TestOtherTrouble(t *testing.T) {
	const stopped = "run.wav: recording stopped after frame 2: "
	for _, c := range []struct {
		name  string
		spoil func(*memory)
		want  string
		keeps int // frames that a reader finds
	}{
		{"sync", func(m *memory) { m.syncErr = errDisk }, stopped + "input/output error: check the space on the disk and its cable", 2},
		{"sync not supported", func(m *memory) { m.syncErr = syscall.ENOTSUP }, "", 2},
		{"close", func(m *memory) { m.closeErr = errDisk }, stopped + "input/output error: check the space on the disk and its cable", 2},
		{"sync, then close", func(m *memory) { m.syncErr, m.closeErr = errDisk, os.ErrPermission }, stopped + "input/output error: check the space on the disk and its cable", 2},
		{"header", func(m *memory) { m.wrote0 = errDisk }, stopped + "input/output error: check the space on the disk and its cable; its header was left as it last was: input/output error", 1},
	} {
		t.Run(c.name, func(t *testing.T) {
			m := &memory{limit: math.MaxInt}
			w := onMemory(t, m, 1, Float64)
			w.Write([]float64{1})
			w.RefreshHeader()
			w.Write([]float64{2})
			c.spoil(m)
			got := ""
			err := w.Close()
			if err != nil {
				got = err.Error()
			}
			if got != c.want {
				t.Errorf("Close says\n%s\nwant\n%s", got, c.want)
			}
			if again := w.Close(); again != err {
				t.Errorf("Close again says %v, want %v", again, err)
			}
			sameBits(t, drain(t, mustRead(t, m.content)), []float64{1, 2}[:c.keeps])
		})
	}
}

func TestWriteAfterClose(t *testing.T) {
	m := &memory{limit: math.MaxInt}
	w := onMemory(t, m, 1, Float64)
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	if err := w.Write([]float64{1}); !errors.Is(err, os.ErrClosed) {
		t.Errorf("Write says %v, want %v", err, os.ErrClosed)
	}
	if err := w.RefreshHeader(); !errors.Is(err, os.ErrClosed) {
		t.Errorf("RefreshHeader says %v, want %v", err, os.ErrClosed)
	}
	if err := w.Close(); err != nil {
		t.Errorf("Close again says %v", err)
	}
}

package wav

import (
	"encoding/binary"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shakerwatch/acquire/internal/sourcetest"
)

// Whatever the bytes: an error of the right manner, or a source that keeps the contract and holds no
// more memory than there are bytes.
func FuzzReader(f *testing.F) {
	recordings, err := filepath.Glob("testdata/*.wav")
	if err != nil || len(recordings) == 0 {
		f.Fatalf("no recordings in testdata, %v", err)
	}
	for _, path := range recordings {
		content, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(content)
		f.Add(content[:len(content)/2])
	}
	f.Add(form("RF64", ds64(1<<64-2, 1, entry("bext", 1<<63)), sized("bext", 0xFFFFFFFF), plain(1, 65535, 16), sized("data", 0xFFFFFFFF)))
	f.Add(form("RIFF", plain(3, 1, 64), chunk("data"), chunk("LIST", []byte("INFO"))))
	f.Fuzz(func(t *testing.T, content []byte) {
		r, err := read(content)
		if err != nil {
			text := err.Error()
			if !strings.HasPrefix(text, "run.wav: ") || strings.Count(text, ": ") < 2 || strings.ContainsAny(text, "\n\r\x00") {
				t.Fatalf("error %q is not FILE: what: what to do", text)
			}
			return
		}
		frame := r.Channels() * r.Encoding().Bytes()
		if r.Frames() < 1 || r.Frames() > int64(len(content)/frame) {
			t.Fatalf("%d frames of %d bytes in %d bytes", r.Frames(), frame, len(content))
		}
		if cap(r.buf) > len(content) || cap(r.buf) > bufferBytes {
			t.Fatalf("a buffer of %d bytes for %d", cap(r.buf), len(content))
		}
		for _, w := range r.Warnings() {
			if !strings.HasPrefix(w, "run.wav: ") || strings.ContainsAny(w, "\n\r\x00") {
				t.Fatalf("warning %q is not FILE: what", w)
			}
		}
		stretches, err := sourcetest.Drain(t, r, 5)
		if err != io.EOF || len(stretches) != 1 || int64(len(stretches[0].Samples)) != r.Frames()*int64(r.Channels()) {
			t.Fatalf("%d stretches, %v; want %d frames in one, %v", len(stretches), err, r.Frames(), io.EOF)
		}
	})
}

// What the Writer takes the Reader gives back, for float64 bit by bit, NaN payloads too.
func FuzzRoundTrip(f *testing.F) {
	seed := make([]byte, 0, 64)
	for _, bits := range []uint64{0x7ff0000000000001, 0xfff8dead0000beef, 0x8000000000000000, 1, 0x7ff0000000000000, 0x47efffffffffffff, 0x3ff0000010000000} {
		seed = binary.LittleEndian.AppendUint64(seed, bits)
	}
	f.Add(seed, uint8(1), true, uint16(0))
	f.Add(seed, uint8(1), false, uint16(100))
	f.Add(seed, uint8(3), true, uint16(0xFFFF))
	f.Add([]byte{}, uint8(2), false, uint16(3))
	f.Fuzz(func(t *testing.T, raw []byte, channels uint8, double bool, piece uint16) {
		if channels == 0 {
			channels = 1
		}
		e := Float32
		if double {
			e = Float64
		}
		var frames []float64
		for ; len(raw) >= 8; raw = raw[8:] {
			frames = append(frames, math.Float64frombits(binary.LittleEndian.Uint64(raw)))
		}
		frames = frames[:len(frames)/int(channels)*int(channels)]

		m := &memory{limit: math.MaxInt}
		w := onMemory(t, m, int(channels), e)
		w.maxRIFF = uint64(piece) // some become RF64
		for at, step := 0, (int(piece)+1)*int(channels); at < len(frames); at += step {
			if err := w.Write(frames[at:min(at+step, len(frames))]); err != nil {
				t.Fatal(err)
			}
			if at/step%3 == 0 {
				if err := w.RefreshHeader(); err != nil {
					t.Fatal(err)
				}
			}
		}
		if err := w.Close(); err != nil {
			t.Fatal(err)
		}
		if len(frames) == 0 {
			if _, err := read(m.content); err == nil {
				t.Fatal("an empty recording was read")
			}
			return
		}
		r := mustRead(t, m.content)
		if r.Channels() != int(channels) || r.Encoding() != e || len(r.Warnings()) > 0 {
			t.Fatalf("%d channels, %v, warnings %q", r.Channels(), r.Encoding(), r.Warnings())
		}
		if e == Float32 {
			for i, v := range frames {
				frames[i] = float64(float32(v))
			}
		}
		sameBits(t, drain(t, r), frames)
	})
}

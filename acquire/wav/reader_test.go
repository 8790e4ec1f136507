package wav

import (
	"bytes"
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"testing/iotest"

	"shakerwatch/acquire/internal/sourcetest"
)

// drain reads all of r, checks the contract and gives the samples.
func drain(t testing.TB, r *Reader) []float64 {
	t.Helper()
	frames := r.Frames()
	stretches, err := sourcetest.Drain(t, r, 7)
	if err != io.EOF {
		t.Fatal(err)
	}
	if len(stretches) != 1 || stretches[0].Lost != 0 {
		t.Fatalf("%d stretches, want one without loss", len(stretches))
	}
	samples := stretches[0].Samples
	if int64(len(samples)) != frames*int64(r.Channels()) || r.Frames() != frames {
		t.Fatalf("%d samples of %d channels, want %d frames before and after, which is now %d", len(samples), r.Channels(), frames, r.Frames())
	}
	return samples
}

func TestEveryEncodingAndHeader(t *testing.T) {
	const frames = 301
	for _, e := range encodings {
		for _, channels := range []int{1, 2, 5} {
			raw, want := pattern(e, frames*channels)
			short, long := plain(tagOf[e], channels, bitsOf[e]), extensible(tagOf[e], channels, bitsOf[e], bitsOf[e])
			cbSize := chunk("fmt ", short[8:], u16(0))
			odd := join(chunk("LIST", []byte("INFOx")), chunk("junk"))
			ones := sized("data", 0xFFFFFFFF, raw, make([]byte, len(raw)%2))
			for name, content := range map[string][]byte{
				"plain 16":            form("RIFF", short, chunk("data", raw)),
				"plain 18":            form("RIFF", cbSize, chunk("data", raw)),
				"extensible":          form("RIFF", long, chunk("data", raw)),
				"valid bits 0":        form("RIFF", extensible(tagOf[e], channels, bitsOf[e], 0), chunk("data", raw)),
				"longer fmt":          form("RIFF", chunk("fmt ", long[8:], []byte("more")), chunk("data", raw)),
				"chunks around":       form("RIFF", odd, short, odd, chunk("data", raw), odd, []byte("rubbish")),
				"a second fmt":        form("RIFF", short, plain(1, 9, 8), chunk("data", raw)),
				"RF64":                form("RF64", ds64(uint64(len(raw)), 0), long, ones, odd),
				"BW64":                form("BW64", ds64(uint64(len(raw)), 0), odd, long, ones, odd),
				"RF64 with 32 bits":   form("RF64", ds64(12, 0), long, chunk("data", raw), odd),
				"RIFF with ds64":      form("RIFF", ds64(uint64(len(raw)), 0), short, ones, odd),
				"RF64, size in table": form("RF64", ds64(uint64(len(raw)), 2, entry("zzzz", 1), entry("bext", 5)), sized("bext", 0xFFFFFFFF, []byte("12345\x00")), long, ones, odd),
			} {
				t.Run(strings.Join([]string{e.String(), name}, "/"), func(t *testing.T) {
					r := mustRead(t, content)
					if r.Encoding() != e || r.Channels() != channels || r.RateHz() != testRate || r.Frames() != frames {
						t.Errorf("%v, %d channels, %v frames/s, %d frames; want %v, %d, %d, %d",
							r.Encoding(), r.Channels(), r.RateHz(), r.Frames(), e, channels, testRate, frames)
					}
					sameBits(t, drain(t, r), want)
					if len(r.Warnings()) > 0 {
						t.Errorf("warnings %q, want none", r.Warnings())
					}
				})
			}
		}
	}
}

func TestWarnings(t *testing.T) {
	const killed = "the header does not say how long the recording is, as when a recorder is killed: read to the end of the file, "
	raw, _ := pattern(PCM16, 8)
	s16 := plain(1, 2, 16)
	left, right := make([]byte, 8), []byte{0, 0, 0, 0, 1, 0, 0, 0}
	for i := 1; i < 8; i++ {
		if i != 4 {
			left[i] = 0xff
		}
	}
	for _, c := range []struct {
		name    string
		content []byte
		frames  int64
		want    string
	}{
		{"cut short", form("RIFF", s16, sized("data", 40, raw)), 4, "the recording is cut short: the header says 10 frames, the 4 that are there are read"},
		{"cut short inside a frame", form("RIFF", s16, sized("data", 40, raw[:15])), 3, "the recording is cut short: the header says 10 frames, the 3 that are there are read"},
		{"cut short beyond 4 GiB", form("RF64", ds64(1<<33, 0), s16, sized("data", 0xFFFFFFFF, raw)), 4, "the recording is cut short: the header says 2147483648 frames, the 4 that are there are read"},
		{"cut short, absurd size", form("RF64", ds64(1<<64-2, 0), s16, sized("data", 0xFFFFFFFF, raw)), 4, "the recording is cut short: the header says 4611686018427387903 frames, the 4 that are there are read"},
		{"ends inside a frame", form("RIFF", s16, chunk("data", raw[:14]), chunk("LIST")), 3, "the data chunk ends inside a frame: its last 2 bytes are not read, the 3 frames before are"},
		{"killed, size 0", sized("RIFF", 0, []byte("WAVE"), s16, sized("data", 0, raw)), 4, killed + "4 frames"},
		{"killed, size 0, the form's size right", form("RIFF", s16, sized("data", 0, raw)), 4, killed + "4 frames"},
		{"killed, all ones", form("RIFF", s16, sized("data", 0xFFFFFFFF, raw[:15])), 3, killed + "3 frames"},
		{"killed, RF64 without ds64", form("RF64", s16, sized("data", 0xFFFFFFFF, raw)), 4, killed + "4 frames"},
		{"killed, ds64 says 0", form("RF64", ds64(0, 0), s16, sized("data", 0xFFFFFFFF, raw)), 4, killed + "4 frames"},
		{"killed, ds64 says all ones", form("BW64", ds64(1<<64-1, 0), s16, sized("data", 0xFFFFFFFF, raw)), 4, killed + "4 frames"},
		{"killed, both say 0", form("RF64", ds64(0, 0), s16, sized("data", 0, raw)), 4, killed + "4 frames"},
		{"killed, silence", sized("RIFF", 0, []byte("WAVE"), s16, sized("data", 0, make([]byte, 16))), 4, killed + "4 frames"},
		{"left-justified", form("RIFF", extensible(1, 1, 32, 24), chunk("data", left)), 2, ""},
		// 20 log10(2^8) = 48.2 dB
		{"right-justified", form("RIFF", extensible(1, 1, 32, 24), chunk("data", left, right)), 4,
			"the header says 24 valid bits of 32, yet bits below are set: if its levels are 48 dB too low, its samples are right-justified; export it again"},
		{"valid bits of a float", form("RIFF", extensible(3, 1, 32, 24), chunk("data", left, right)), 4, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := mustRead(t, c.content)
			if r.Frames() != c.frames {
				t.Errorf("%d frames, want %d", r.Frames(), c.frames)
			}
			var want []string
			if c.want != "" {
				want = []string{"run.wav: " + c.want}
			}
			if !slices.Equal(r.Warnings(), want) {
				t.Errorf("warnings\n%q\nwant\n%q", r.Warnings(), want)
			}
			drain(t, r)
		})
	}
}

// The value of a left-justified sample is that of its container [3].
func TestValidBitsScale(t *testing.T) {
	r := mustRead(t, form("RIFF", extensible(1, 1, 32, 24), chunk("data", []byte("\x00\x00\x00\x80\x00\x01\x00\x00\x00\xff\xff\x7f"))))
	sameBits(t, drain(t, r), []float64{-1, 0x1p-23, 1 - 0x1p-23})
}

func TestNaNAndInfinityPass(t *testing.T) {
	want := []float64{math.NaN(), math.Inf(1), math.Inf(-1), 2.5, math.Float64frombits(0xfff8_dead_beef_0001)}
	var raw []byte
	for _, v := range want {
		raw = append(raw, u64(math.Float64bits(v))...)
	}
	sameBits(t, drain(t, mustRead(t, form("RIFF", plain(3, 1, 64), chunk("data", raw)))), want)
}

// wrapped reads each piece through a wrapper of testing/iotest.
type wrapped struct {
	io.ReaderAt
	wrap func(io.Reader) io.Reader
}

func (w wrapped) ReadAt(p []byte, off int64) (int, error) {
	return w.wrap(io.NewSectionReader(w.ReaderAt, off, int64(len(p)))).Read(p)
}

func TestShortReads(t *testing.T) {
	raw, want := pattern(PCM24, 3*40)
	content := form("RF64", ds64(uint64(len(raw)), 1, entry("bext", 3)), chunk("LIST", []byte("odd")), extensible(1, 3, 24, 24), sized("data", 0xFFFFFFFF, raw))
	for name, wrap := range map[string]func(io.Reader) io.Reader{
		"one byte":       iotest.OneByteReader,
		"half":           iotest.HalfReader,
		"error with end": iotest.DataErrReader,
	} {
		t.Run(name, func(t *testing.T) {
			r, err := NewReader(wrapped{bytes.NewReader(content), wrap}, int64(len(content)), "run.wav")
			if err != nil {
				t.Fatal(err)
			}
			sameBits(t, drain(t, r), want)
		})
	}
	nothing := func(io.Reader) io.Reader { return bytes.NewBuffer(nil) }
	silent := func(io.Reader) io.Reader { return iotest.ErrReader(nil) }
	for want, wrap := range map[error]func(io.Reader) io.Reader{io.ErrUnexpectedEOF: nothing, io.ErrNoProgress: silent} {
		if _, err := NewReader(wrapped{bytes.NewReader(content), wrap}, int64(len(content)), "run.wav"); !errors.Is(err, want) {
			t.Errorf("a file that gives nothing: %v, want %v", err, want)
		}
	}
}

func TestBrokenInMidFile(t *testing.T) {
	const frames = 40_000 // several buffers
	raw, want := pattern(PCM16, 2*frames)
	content := string(form("RIFF", plain(1, 2, 16), chunk("data", raw)))
	dataPos := len(content) - len(raw)
	for _, c := range []struct {
		name string
		read int // bytes of samples before it breaks
		err  error
		text string
	}{
		{"first frame", 0, errDisk, "frame 0: input/output error: check the disk it lies on, or copy it again"},
		{"inside the first frame", 3, errDisk, "frame 0: input/output error: check the disk it lies on, or copy it again"},
		{"inside a later frame", 100_001, errDisk, "frame 25000: input/output error: check the disk it lies on, or copy it again"},
		{"between buffers", bufferBytes, errDisk, "frame 16384: input/output error: check the disk it lies on, or copy it again"},
		{"file became shorter", 100_001, io.EOF, "frame 25000: the file became shorter while it was read: check the disk it lies on, or copy it again"},
	} {
		t.Run(c.name, func(t *testing.T) {
			r, err := NewReader(brokenAt{content, int64(dataPos + c.read), c.err}, int64(len(content)), "run.wav")
			if err != nil {
				t.Fatal(err)
			}
			stretches, err := sourcetest.Drain(t, r, 5000)
			if err == nil || err.Error() != "run.wav: "+c.text {
				t.Errorf("error is\n%v\nwant\nrun.wav: %s", err, c.text)
			}
			if errors.Is(err, io.EOF) {
				t.Error("a broken file looks like the end of the recording")
			}
			var got []float64
			if len(stretches) > 0 {
				got = stretches[0].Samples
			}
			sameBits(t, got, want[:c.read/4*2])
		})
	}
}

// A broken file whose valid bits are to be checked is not an error before the frames are read.
func TestBrokenWhileValidBitsAreChecked(t *testing.T) {
	content := string(form("RIFF", extensible(1, 1, 32, 24), chunk("data", make([]byte, 400))))
	r, err := NewReader(brokenAt{content, int64(len(content)) - 200, errDisk}, int64(len(content)), "run.wav")
	if err != nil {
		t.Fatal(err)
	}
	stretches, err := sourcetest.Drain(t, r, 7)
	if !errors.Is(err, errDisk) || len(stretches) != 1 || len(stretches[0].Samples) != 50 {
		t.Errorf("%d stretches, error %v; want one of 50 samples and %v", len(stretches), err, errDisk)
	}
}

func TestReadPanicsOnShape(t *testing.T) {
	r := mustRead(t, form("RIFF", plain(1, 2, 16), chunk("data", make([]byte, 8))))
	for _, n := range []int{0, 1, 3} {
		func() {
			defer func() {
				if text, ok := recover().(string); !ok || !strings.HasPrefix(text, "wav: ") {
					t.Errorf("Read of %d samples of 2 channels: recovered %q, want a panic of this package", n, text)
				}
			}()
			r.Read(make([]float64, n))
		}()
	}
}

func TestReadAllocatesNothing(t *testing.T) {
	for _, e := range encodings {
		raw, _ := pattern(e, 3*30_000)
		r := mustRead(t, form("RIFF", extensible(tagOf[e], 3, bitsOf[e], bitsOf[e]), chunk("data", raw)))
		dst := make([]float64, 3*100)
		if n := testing.AllocsPerRun(250, func() {
			if _, err := r.Read(dst); err != nil {
				t.Fatal(err)
			}
		}); n != 0 {
			t.Errorf("%v: %v allocations a Read, want 0", e, n)
		}
	}
}

func TestOpenAndClose(t *testing.T) {
	raw, want := pattern(Float32, 4)
	path := filepath.Join(t.TempDir(), "run.wav")
	if err := os.WriteFile(path, form("RIFF", plain(3, 2, 32), chunk("data", raw)), 0o600); err != nil {
		t.Fatal(err)
	}
	r, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	dst := make([]float64, 2)
	if n, err := r.Read(dst); n != 1 || err != nil {
		t.Fatalf("Read = %d, %v; want 1 frame", n, err)
	}
	sameBits(t, dst, want[:2])
	for range 2 {
		if err := r.Close(); err != nil {
			t.Errorf("Close = %v", err)
		}
	}
	if n, err := r.Read(dst); n != 0 || !errors.Is(err, os.ErrClosed) {
		t.Errorf("Read after Close = %d, %v; want 0, %v", n, err, os.ErrClosed)
	}
}

// Memory is bounded by the file and by bufferBytes, whatever the header says.
func TestBufferSize(t *testing.T) {
	huge := form("RF64", ds64(1<<62, 0), plain(1, 2, 16), sized("data", 0xFFFFFFFF, make([]byte, 100)))
	if n := len(mustRead(t, huge).buf); n != 100 {
		t.Errorf("buffer of %d bytes for 100 bytes of samples", n)
	}
	wide := form("RIFF", plain(1, 32767, 16), chunk("data", make([]byte, 5*65534)))
	if n := len(mustRead(t, wide).buf); n != 65534 {
		t.Errorf("buffer of %d bytes for frames of 65534 bytes", n)
	}
}

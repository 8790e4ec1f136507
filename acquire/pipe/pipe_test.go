package pipe_test

import (
	"bytes"
	"encoding/binary"
	"errors"
	"io"
	"math"
	"os"
	"slices"
	"strings"
	"testing"
	"testing/iotest"

	"shakerwatch/acquire"
	"shakerwatch/acquire/internal/sourcetest"
	"shakerwatch/acquire/pipe"
)

var encodings = []pipe.Encoding{pipe.S16, pipe.S24, pipe.S32, pipe.F32, pipe.F64}

// pattern is n samples of an encoding with the values k/128 in [-1, 1), which every encoding holds
// exactly, as bytes and as values.
func pattern(e pipe.Encoding, n int) (raw []byte, want []float64) {
	for k := range n {
		v := float64(k*37%256-128) / 128
		want = append(want, v)
		switch e {
		case pipe.F32:
			raw = binary.LittleEndian.AppendUint32(raw, math.Float32bits(float32(v)))
		case pipe.F64:
			raw = binary.LittleEndian.AppendUint64(raw, math.Float64bits(v))
		default:
			integer := int64(v * math.Exp2(float64(8*e.Bytes()-1)))
			for i := range e.Bytes() {
				raw = append(raw, byte(integer>>(8*i)))
			}
		}
	}
	return raw, want
}

// frames is what a source without gaps gave, and what ended it.
func frames(t *testing.T, s acquire.Source) ([]float64, error) {
	t.Helper()
	got, err := sourcetest.Drain(t, s, 50)
	if len(got) == 0 {
		return nil, err
	}
	if len(got) != 1 || got[0].Lost != 0 {
		t.Fatalf("%d stretches, %d frames lost; want one without loss", len(got), got[0].Lost)
	}
	return got[0].Samples, err
}

// Whatever pieces the reader hands out, the frames are the same.
func TestReaders(t *testing.T) {
	const several = 100_000 // samples of several buffers of 64 KiB
	for _, c := range []struct {
		name    string
		samples int
		wrap    func(io.Reader) io.Reader
	}{
		{"plain", several, func(r io.Reader) io.Reader { return r }},
		{"half", several, iotest.HalfReader},
		{"one byte", 300, iotest.OneByteReader},
		{"data and error", several, iotest.DataErrReader},
		{"data and error by halves", several, func(r io.Reader) io.Reader { return iotest.DataErrReader(iotest.HalfReader(r)) }},
		{"empty reads in between", 300, func(r io.Reader) io.Reader { return &hesitant{r: iotest.OneByteReader(r)} }},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, e := range encodings {
				for _, channels := range []int{1, 3, 5} {
					raw, want := pattern(e, c.samples/channels*channels)
					s := pipe.New(c.wrap(bytes.NewReader(raw)), 48000, channels, e)
					got, err := frames(t, s)
					if err != io.EOF || !slices.Equal(got, want) || s.Leftover() != 0 {
						t.Errorf("%v, %d channels: %d samples of %d, %v, %d bytes left over",
							e, channels, len(got), len(want), err, s.Leftover())
					}
				}
			}
		})
	}
}

// A frame larger than the buffer of smaller ones.
func TestLargeFrame(t *testing.T) {
	const channels = 9000 // of 8 bytes: 72 kB
	raw, want := pattern(pipe.F64, 3*channels)
	got, err := frames(t, pipe.New(iotest.HalfReader(bytes.NewReader(raw)), 100, channels, pipe.F64))
	if err != io.EOF || !slices.Equal(got, want) {
		t.Errorf("%d samples of %d, %v", len(got), len(want), err)
	}
}

// A hesitant reader returns nothing, without an error, 98 times before each read that gives something.
type hesitant struct {
	r     io.Reader
	empty int
}

func (h *hesitant) Read(p []byte) (int, error) {
	if h.empty++; h.empty%99 != 0 {
		return 0, nil
	}
	return h.r.Read(p)
}

func TestRateAndChannels(t *testing.T) {
	s := pipe.New(strings.NewReader(""), 51200.5, 7, pipe.S24)
	if s.RateHz() != 51200.5 || s.Channels() != 7 {
		t.Errorf("%d channels at %v frames/s", s.Channels(), s.RateHz())
	}
}

func TestEndInsideAFrame(t *testing.T) {
	for _, e := range encodings {
		const channels = 3
		size := channels * e.Bytes()
		raw, want := pattern(e, 4*channels)
		for cut := range len(raw) + 1 {
			s := pipe.New(iotest.HalfReader(bytes.NewReader(raw[:cut])), 100, channels, e)
			if n := s.Leftover(); n != 0 {
				t.Fatalf("%v: %d bytes left over before the end", e, n)
			}
			got, err := frames(t, s)
			if err != io.EOF || !slices.Equal(got, want[:cut/size*channels]) || s.Leftover() != cut%size {
				t.Errorf("%v: of %d bytes %d samples, %v, %d left over; want %d left over",
					e, cut, len(got), err, s.Leftover(), cut%size)
			}
		}
	}
}

// script is a reader that gives pieces in turn. It must not be asked for more: a pipe would wait.
type script struct {
	t      *testing.T
	pieces [][]byte
}

func (s *script) Read(p []byte) (int, error) {
	if len(s.pieces) == 0 {
		s.t.Fatal("Read waits for more although a whole frame is there")
	}
	n := copy(p, s.pieces[0])
	s.pieces = s.pieces[1:]
	return n, nil
}

func TestReadDoesNotWaitToFill(t *testing.T) {
	raw, want := pattern(pipe.S16, 20)
	r := &script{t: t, pieces: [][]byte{raw[:3], raw[3:9], raw[9:22]}} // 4-byte frames: 2 whole ones, then 5
	s := pipe.New(r, 100, 2, pipe.S16)
	dst := make([]float64, 40)
	for _, c := range []struct{ ask, n, at int }{{20, 2, 0}, {1, 1, 2}, {20, 2, 3}} {
		n, err := s.Read(dst[:2*c.ask])
		if n != c.n || err != nil || !slices.Equal(dst[:2*n], want[2*c.at:2*(c.at+c.n)]) {
			t.Errorf("Read of %d frames = %d, %v, %v; want %d from frame %d", c.ask, n, err, dst[:2*n], c.n, c.at)
		}
	}
}

func TestBrokenReader(t *testing.T) {
	broken := errors.New("cable pulled")
	raw, want := pattern(pipe.S16, 10)
	for _, c := range []struct {
		name string
		r    io.Reader
		want string
		is   error
		n    int // samples before it
	}{
		{"at once", iotest.ErrReader(broken), "pipe after frame 0: cable pulled: check the program that writes into it", broken, 0},
		{"inside a frame", io.MultiReader(bytes.NewReader(raw[:11]), iotest.ErrReader(broken)),
			"pipe after frame 2: cable pulled: check the program that writes into it", broken, 4},
		{"with the last frames", iotest.DataErrReader(io.MultiReader(bytes.NewReader(raw), iotest.ErrReader(broken))),
			"pipe after frame 5: cable pulled: check the program that writes into it", broken, 10},
		{"deadline", iotest.TimeoutReader(iotest.OneByteReader(bytes.NewReader(raw))),
			"pipe after frame 0: timeout: check the program that writes into it", iotest.ErrTimeout, 0},
		{"never anything", iotest.ErrReader(nil),
			"pipe after frame 0: multiple Read calls return no data or error: check the program that writes into it", io.ErrNoProgress, 0},
		{"cut off in a protocol below", iotest.ErrReader(io.ErrUnexpectedEOF),
			"pipe after frame 0: unexpected EOF: check the program that writes into it", io.ErrUnexpectedEOF, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			got, err := frames(t, pipe.New(c.r, 100, 2, pipe.S16))
			if err == nil || err.Error() != c.want || !errors.Is(err, c.is) {
				t.Errorf("error is\n%v\nwant\n%s", err, c.want)
			}
			if !slices.Equal(got, want[:c.n]) {
				t.Errorf("%d samples before it, want %d", len(got), c.n)
			}
		})
	}
}

// Closing the reader ends a Read that waits, cleanly.
func TestClosedReader(t *testing.T) {
	raw, want := pattern(pipe.S16, 4)
	for name, open := range map[string]func() (io.ReadCloser, io.WriteCloser){
		"of the system": func() (io.ReadCloser, io.WriteCloser) {
			r, w, err := os.Pipe()
			if err != nil {
				t.Fatal(err)
			}
			return r, w
		},
		"in memory": func() (io.ReadCloser, io.WriteCloser) { r, w := io.Pipe(); return r, w },
	} {
		t.Run(name, func(t *testing.T) {
			r, w := open()
			defer w.Close()
			go w.Write(raw[:7]) // a frame and three bytes
			s := pipe.New(r, 100, 2, pipe.S16)
			dst := make([]float64, 2)
			if n, err := s.Read(dst); n != 1 || err != nil || !slices.Equal(dst, want[:2]) {
				t.Fatalf("Read = %d, %v, %v", n, err, dst)
			}
			go r.Close() // before or while Read waits: both must end it
			if n, err := s.Read(dst); n != 0 || err != io.EOF {
				t.Errorf("Read = %d, %v; want 0, %v", n, err, io.EOF)
			}
			if s.Leftover() != 3 {
				t.Errorf("%d bytes left over, want 3", s.Leftover())
			}
		})
	}
}

// Values that are no measurement pass through, and a selection of the channels in use makes lost
// frames of those that are not finite.
func TestValuesThatAreNoMeasurement(t *testing.T) {
	samples := []float64{ // channel 1, channel 2
		1, 2,
		math.NaN(), 3,
		math.Inf(1), 4,
		5, math.Inf(-1),
		1e300, -math.MaxFloat64,
	}
	var raw []byte
	for _, v := range samples {
		raw = binary.LittleEndian.AppendUint64(raw, math.Float64bits(v))
	}
	open := func() acquire.Source { return pipe.New(bytes.NewReader(raw), 100, 2, pipe.F64) }
	got, _ := frames(t, open())
	if !slices.EqualFunc(got, samples, func(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) }) {
		t.Errorf("read %v, want %v", got, samples)
	}
	selected, _ := sourcetest.Drain(t, acquire.Select(open(), []int{0}), 3)
	want := []sourcetest.Stretch{{Samples: []float64{1}}, {Lost: 2}, {Samples: []float64{5, 1e300}}}
	if !slices.EqualFunc(selected, want, func(a, b sourcetest.Stretch) bool {
		return a.Lost == b.Lost && slices.Equal(a.Samples, b.Samples)
	}) {
		t.Errorf("of channel 1: %v, want %v", selected, want)
	}
}

func TestReadAllocatesNothing(t *testing.T) {
	for _, e := range encodings {
		s := pipe.New(zeros{}, 48000, 8, e)
		dst := make([]float64, 8*960)
		if n := testing.AllocsPerRun(100, func() { s.Read(dst) }); n != 0 {
			t.Errorf("%v: %v allocations a Read, want none", e, n)
		}
	}
}

// zeros is a reader without end that gives odd pieces.
type zeros struct{}

func (zeros) Read(p []byte) (int, error) {
	n := min(len(p), 4099)
	clear(p[:n])
	return n, nil
}

func TestPanics(t *testing.T) {
	empty := strings.NewReader("")
	for name, f := range map[string]func(){
		"no channels": func() { pipe.New(empty, 100, 0, pipe.S16) },
		"no rate":     func() { pipe.New(empty, math.NaN(), 1, pipe.S16) },
		"no encoding": func() { pipe.New(empty, 100, 1, 0) },
		"dst of none": func() { pipe.New(empty, 100, 2, pipe.S16).Read(nil) },
		"dst of a part": func() {
			pipe.New(empty, 100, 2, pipe.S16).Read(make([]float64, 3))
		},
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if text, ok := recover().(string); !ok || !strings.HasPrefix(text, "pipe: ") {
					t.Errorf("recovered %q, want a panic of this package", text)
				}
			}()
			f()
		})
	}
}

package pipe_test

import (
	"bytes"
	"encoding/binary"
	"io"
	"math"
	"math/big"
	"slices"
	"testing"

	"shakerwatch/acquire/pipe"
)

// ragged hands out pieces of changing lengths, from 0 on.
type ragged struct {
	r     io.Reader
	seed  uint
	reads uint
}

func (g *ragged) Read(p []byte) (int, error) {
	g.reads++
	n := int((g.seed + g.reads*g.reads*7) % 23)
	return g.r.Read(p[:min(n, len(p))])
}

// expect works out the samples of raw by another way: big integers and encoding/binary.Read.
func expect(t *testing.T, e pipe.Encoding, raw []byte) []float64 {
	t.Helper()
	want := make([]float64, len(raw)/e.Bytes())
	switch e {
	case pipe.F32:
		single := make([]float32, len(want))
		if err := binary.Read(bytes.NewReader(raw), binary.LittleEndian, single); err != nil {
			t.Fatal(err)
		}
		for i, v := range single {
			want[i] = float64(v)
		}
	case pipe.F64:
		if err := binary.Read(bytes.NewReader(raw), binary.LittleEndian, want); err != nil {
			t.Fatal(err)
		}
	default:
		full := new(big.Int).Lsh(big.NewInt(1), uint(8*e.Bytes()))
		half := new(big.Int).Rsh(full, 1)
		for i := range want {
			b := slices.Clone(raw[i*e.Bytes() : (i+1)*e.Bytes()])
			slices.Reverse(b)
			integer := new(big.Int).SetBytes(b)
			if integer.Cmp(half) >= 0 {
				integer.Sub(integer, full)
			}
			want[i], _ = new(big.Rat).SetFrac(integer, half).Float64()
		}
	}
	return want
}

func FuzzSource(f *testing.F) {
	f.Add([]byte{}, uint8(0), uint8(0), uint(0))
	f.Add([]byte{1, 2, 3}, uint8(0), uint8(1), uint(1))
	f.Add([]byte{0xff, 0xff, 0x7f, 0, 0, 0x80, 1}, uint8(1), uint8(0), uint(9))
	f.Add([]byte("\x00\x00\x00\x80\xff\xff\xff\x7f\x01"), uint8(2), uint8(0), uint(3))
	f.Add([]byte("\x00\x00\xc0\x7f\x00\x00\x80\xff\x01\x00\x80\x7f"), uint8(3), uint8(0), uint(5))
	f.Add(bytes.Repeat([]byte{0, 0, 0, 0, 0, 0, 0xf0, 0x7f}, 9), uint8(4), uint8(1), uint(22))
	f.Fuzz(func(t *testing.T, raw []byte, encoding, channels uint8, seed uint) {
		e := encodings[int(encoding)%len(encodings)]
		wide := 1 + int(channels)%9
		whole := len(raw) / (wide * e.Bytes())
		want := expect(t, e, raw[:whole*wide*e.Bytes()])
		s := pipe.New(&ragged{r: bytes.NewReader(raw), seed: seed}, 100, wide, e)
		got, err := frames(t, s)
		if err != io.EOF || s.Leftover() != len(raw)-whole*wide*e.Bytes() {
			t.Fatalf("ended by %v with %d bytes left over", err, s.Leftover())
		}
		if !slices.EqualFunc(got, want, same) {
			t.Fatalf("read %v, want %v", got, want)
		}
	})
}

// same takes all NaN for equal: turning a float32 into a float64 may quieten one.
func same(a, b float64) bool {
	return math.Float64bits(a) == math.Float64bits(b) || a != a && b != b
}

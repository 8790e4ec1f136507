package pipe

import (
	"encoding/binary"
	"fmt"
	"math"
)

// An Encoding says how a sample stands in the stream, always little endian.
type Encoding int

// The encodings. An integer of b bits is a two's complement number and stands for integer / 2^(b-1),
// in [-1, 1); the three bytes of S24 are not padded. F32 and F64 are IEEE 754 and stand for
// themselves.
const (
	S16 Encoding = iota + 1
	S24
	S32
	F32
	F64
)

// ParseEncoding is the Encoding of a name: s16, s24, s32, f32 or f64. The error lists them.
func ParseEncoding(name string) (Encoding, error) {
	for e := S16; e <= F64; e++ {
		if e.String() == name {
			return e, nil
		}
	}
	return 0, fmt.Errorf("encoding %q: choose s16, s24, s32, f32 or f64", name)
}

func (e Encoding) String() string {
	switch e {
	case S16:
		return "s16"
	case S24:
		return "s24"
	case S32:
		return "s32"
	case F32:
		return "f32"
	case F64:
		return "f64"
	}
	return fmt.Sprintf("encoding %d", int(e))
}

// Bytes is the number of bytes in a sample, 0 for an Encoding that is none of the constants.
func (e Encoding) Bytes() int {
	switch e {
	case S16:
		return 2
	case S24:
		return 3
	case S32, F32:
		return 4
	case F64:
		return 8
	}
	return 0
}

// FitsFloat32 tells whether a float32 holds every sample of the encoding exactly, so that a
// recording of float32 loses nothing: its significand has 24 bits.
func (e Encoding) FitsFloat32() bool { return e == S16 || e == S24 || e == F32 }

// decode fills dst from the beginning of src, which holds at least len(dst) samples.
func (e Encoding) decode(dst []float64, src []byte) {
	le := binary.LittleEndian
	switch e {
	case S16:
		for i := range dst {
			dst[i] = float64(int16(le.Uint16(src[2*i:]))) / (1 << 15)
		}
	case S24:
		for i := range dst {
			b := src[3*i : 3*i+3]
			// In the upper three bytes of an int32, so that its sign is theirs.
			dst[i] = float64(int32(uint32(b[0])<<8|uint32(b[1])<<16|uint32(b[2])<<24)) / (1 << 31)
		}
	case S32:
		for i := range dst {
			dst[i] = float64(int32(le.Uint32(src[4*i:]))) / (1 << 31)
		}
	case F32:
		for i := range dst {
			dst[i] = float64(math.Float32frombits(le.Uint32(src[4*i:])))
		}
	case F64:
		for i := range dst {
			dst[i] = math.Float64frombits(le.Uint64(src[8*i:]))
		}
	}
}

package wav

import (
	"encoding/binary"
	"fmt"
	"math"
)

// An Encoding says how a sample is stored.
type Encoding int

// The encodings that are read. Float32 and Float64 can be written, too.
const (
	PCM16 Encoding = iota + 1
	PCM24
	PCM32
	Float32
	Float64
)

func (e Encoding) String() string {
	switch e {
	case PCM16, PCM24, PCM32:
		return fmt.Sprintf("PCM %d bit", 8*e.Bytes())
	case Float32, Float64:
		return fmt.Sprintf("IEEE float %d bit", 8*e.Bytes())
	}
	return fmt.Sprintf("encoding %d", int(e))
}

// Bytes is the number of bytes in a sample, 0 for an Encoding that is none of the constants.
func (e Encoding) Bytes() int {
	switch e {
	case PCM16:
		return 2
	case PCM24:
		return 3
	case PCM32, Float32:
		return 4
	case Float64:
		return 8
	}
	return 0
}

func (e Encoding) isFloat() bool { return e == Float32 || e == Float64 }

// decode fills dst from src, which holds len(dst) samples.
func (e Encoding) decode(dst []float64, src []byte) {
	le := binary.LittleEndian
	switch e {
	case PCM16:
		for i := range dst {
			dst[i] = float64(int16(le.Uint16(src[2*i:]))) / (1 << 15)
		}
	case PCM24:
		for i := range dst {
			s := src[3*i : 3*i+3]
			dst[i] = float64(int32(uint32(s[0])<<8|uint32(s[1])<<16|uint32(s[2])<<24)) / (1 << 31)
		}
	case PCM32:
		for i := range dst {
			dst[i] = float64(int32(le.Uint32(src[4*i:]))) / (1 << 31)
		}
	case Float32:
		for i := range dst {
			dst[i] = float64(math.Float32frombits(le.Uint32(src[4*i:])))
		}
	case Float64:
		for i := range dst {
			dst[i] = math.Float64frombits(le.Uint64(src[8*i:]))
		}
	}
}

// encode fills dst, which has room for len(src) samples. e is a floating-point encoding.
func (e Encoding) encode(dst []byte, src []float64) {
	le := binary.LittleEndian
	switch e {
	case Float32:
		for i, v := range src {
			le.PutUint32(dst[4*i:], math.Float32bits(float32(v)))
		}
	case Float64:
		for i, v := range src {
			le.PutUint64(dst[8*i:], math.Float64bits(v))
		}
	}
}

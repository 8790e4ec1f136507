package wav

import (
	"math"
	"testing"
)

func TestDecode(t *testing.T) {
	for _, c := range []struct {
		name string
		e    Encoding
		raw  string
		want []float64
	}{
		// integer / 2^(bits-1), both ends, -1 and 1 as integers, and a value with three different bytes
		{"PCM 16", PCM16, "\x00\x80\xff\x7f\xff\xff\x01\x00\x34\x12", []float64{-1, 32767. / 32768, -1. / 32768, 1. / 32768, 0x1234 / 32768.}},
		{"PCM 24", PCM24, "\x00\x00\x80\xff\xff\x7f\xff\xff\xff\x01\x00\x00\x56\x34\x12", []float64{-1, 8388607. / 8388608, -1. / 8388608, 1. / 8388608, 0x123456 / 8388608.}},
		{"PCM 32", PCM32, "\x00\x00\x00\x80\xff\xff\xff\x7f\xff\xff\xff\xff\x01\x00\x00\x00\x78\x56\x34\x12",
			[]float64{-1, 2147483647. / 2147483648, -1. / 2147483648, 1. / 2147483648, 0x12345678 / 2147483648.}},
		// IEEE 754: 1.5 is 3FC00000, -infinity FF800000, the smallest positive 00000001
		{"float 32", Float32, "\x00\x00\xc0\x3f\x00\x00\x80\xff\x01\x00\x00\x00\x00\x00\x00\x80", []float64{1.5, math.Inf(-1), 0x1p-149, math.Copysign(0, -1)}},
		{"float 64", Float64, "\x00\x00\x00\x00\x00\x00\xf8\x3f\x01\x00\x00\x00\x00\x00\xf0\x7f", []float64{1.5, math.Float64frombits(0x7ff0000000000001)}},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := make([]float64, len(c.want))
			c.e.decode(got, []byte(c.raw))
			sameBits(t, got, c.want)
		})
	}
}

func TestEncodingNames(t *testing.T) {
	for e, want := range map[Encoding]string{
		PCM16: "PCM 16 bit", PCM24: "PCM 24 bit", PCM32: "PCM 32 bit",
		Float32: "IEEE float 32 bit", Float64: "IEEE float 64 bit", 0: "encoding 0", 9: "encoding 9",
	} {
		if e.String() != want {
			t.Errorf("Encoding(%d) is %q, want %q", int(e), e, want)
		}
		if e.Bytes() != bitsOf[e]/8 {
			t.Errorf("%v has %d bytes, want %d", e, e.Bytes(), bitsOf[e]/8)
		}
	}
}

package wav

import (
	"bytes"
	"encoding/binary"
	"math"
)

// The builders here make files byte by byte, without the Writer's code.

func u16(v int) []byte    { return binary.LittleEndian.AppendUint16(nil, uint16(v)) }
func u32(v uint32) []byte { return binary.LittleEndian.AppendUint32(nil, v) }
func u64(v uint64) []byte { return binary.LittleEndian.AppendUint64(nil, v) }

func join(parts ...[]byte) []byte { return bytes.Join(parts, nil) }

// chunk is a chunk with its pad byte.
func chunk(name string, body ...[]byte) []byte {
	b := join(body...)
	return sized(name, uint32(len(b)), b, make([]byte, len(b)%2))
}

// sized is a chunk that says it has size bytes.
func sized(name string, size uint32, body ...[]byte) []byte {
	return join([]byte(name), u32(size), join(body...))
}

// form is a file whose second field is right, or all ones for the 64-bit forms.
func form(name string, chunks ...[]byte) []byte {
	b := join([]byte("WAVE"), join(chunks...))
	size := uint32(len(b))
	if name != "RIFF" {
		size = 0xFFFFFFFF
	}
	return sized(name, size, b)
}

const testRate = 4096

// plain is the oldest fmt chunk.
func plain(tag, channels, bits int) []byte {
	return chunk("fmt ", fields(tag, channels, testRate, channels*bits/8, bits))
}

// fields are the first 16 bytes of a fmt chunk.
func fields(tag, channels, rateHz, align, bits int) []byte {
	return join(u16(tag), u16(channels), u32(uint32(rateHz)), u32(uint32(rateHz*align)), u16(align), u16(bits))
}

const subformat = "\x00\x00\x00\x00\x10\x00\x80\x00\x00\xaa\x00\x38\x9b\x71"

// extensible is a fmt chunk in the extensible form.
func extensible(tag, channels, bits, valid int) []byte {
	return chunk("fmt ", fields(0xFFFE, channels, testRate, channels*bits/8, bits),
		u16(22), u16(valid), u32(0x3), u16(tag), []byte(subformat))
}

// ds64 is a ds64 chunk with table entries, already as bytes.
func ds64(dataBytes uint64, entries uint32, table ...[]byte) []byte {
	return chunk("ds64", u64(1<<40), u64(dataBytes), u64(1<<40), u32(entries), join(table...))
}

func entry(name string, size uint64) []byte { return join([]byte(name), u64(size)) }

// tagOf and bitsOf say how an encoding stands in a fmt chunk, as tables of their own.
var (
	encodings = []Encoding{PCM16, PCM24, PCM32, Float32, Float64}
	tagOf     = map[Encoding]int{PCM16: 1, PCM24: 1, PCM32: 1, Float32: 3, Float64: 3}
	bitsOf    = map[Encoding]int{PCM16: 16, PCM24: 24, PCM32: 32, Float32: 32, Float64: 64}
)

// pattern is n samples of an encoding as bytes and as digital values. The integers take every byte
// pattern of a multiplicative sequence; floating point is a fraction that float32 holds exactly.
func pattern(e Encoding, n int) (raw []byte, want []float64) {
	for k := range n {
		bits := uint64(k)*0x9E3779B97F4A7C15 + 0x8000000000000000
		if e == Float32 || e == Float64 {
			v := float64(int32(bits>>40)-1<<23) / (1 << 22)
			want = append(want, v)
			if e == Float32 {
				raw = append(raw, u32(math.Float32bits(float32(v)))...)
			} else {
				raw = append(raw, u64(math.Float64bits(v))...)
			}
			continue
		}
		width := bitsOf[e]
		integer := int64(bits) >> (64 - width)
		for i := range width / 8 {
			raw = append(raw, byte(integer>>(8*i)))
		}
		want = append(want, float64(integer)/math.Pow(2, float64(width-1)))
	}
	return raw, want
}

// read opens content as a file named run.wav.
func read(content []byte) (*Reader, error) {
	return NewReader(bytes.NewReader(content), int64(len(content)), "run.wav")
}

// A tester is a testing.TB or a rapid.T.
type tester interface {
	Helper()
	Fatal(args ...any)
	Fatalf(format string, args ...any)
}

func mustRead(t tester, content []byte) *Reader {
	t.Helper()
	r, err := read(content)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// sameBits compares also NaN and the sign of zero.
func sameBits(t tester, got, want []float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%d samples, want %d", len(got), len(want))
	}
	for i := range want {
		if math.Float64bits(got[i]) != math.Float64bits(want[i]) {
			t.Fatalf("sample %d = %v (%#x), want %v (%#x)", i, got[i], math.Float64bits(got[i]), want[i], math.Float64bits(want[i]))
		}
	}
}

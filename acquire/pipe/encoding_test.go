package pipe

import (
	"math"
	"testing"
)

func TestParseEncoding(t *testing.T) {
	for _, c := range []struct {
		name  string
		want  Encoding
		bytes int
		fits  bool
	}{
		{"s16", S16, 2, true},
		{"s24", S24, 3, true},
		{"s32", S32, 4, false},
		{"f32", F32, 4, true},
		{"f64", F64, 8, false},
	} {
		e, err := ParseEncoding(c.name)
		if err != nil || e != c.want || e.String() != c.name || e.Bytes() != c.bytes || e.FitsFloat32() != c.fits {
			t.Errorf("%s: %v, %v, %d bytes, fits float32 %v", c.name, e, err, e.Bytes(), e.FitsFloat32())
		}
	}
	for _, name := range []string{"", "S16", "s8", "u16", "float", "s16 ", "encoding 1"} {
		e, err := ParseEncoding(name)
		if e != 0 || err == nil {
			t.Errorf("%q is taken for %v", name, e)
		}
	}
	_, err := ParseEncoding("s8")
	if want := `encoding "s8": choose s16, s24, s32, f32 or f64`; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
}

// A sample of an integer encoding times 2^(b-1) is the integer that the bytes spell, a float is what
// IEEE 754 says of its bits; both worked out by hand.
func TestDecode(t *testing.T) {
	for _, c := range []struct {
		name string
		e    Encoding
		src  []byte
		want float64
	}{
		{"s16 zero", S16, []byte{0, 0}, 0},
		{"s16 one", S16, []byte{1, 0}, 1.0 / 32768},
		{"s16 order of bytes", S16, []byte{0x34, 0x12}, 0x1234 / 32768.0},
		{"s16 largest", S16, []byte{0xff, 0x7f}, 32767.0 / 32768},
		{"s16 smallest", S16, []byte{0x00, 0x80}, -1},
		{"s16 minus one", S16, []byte{0xff, 0xff}, -1.0 / 32768},
		{"s24 one", S24, []byte{1, 0, 0}, 1.0 / 8388608},
		{"s24 order of bytes", S24, []byte{0x56, 0x34, 0x12}, 0x123456 / 8388608.0},
		{"s24 largest", S24, []byte{0xff, 0xff, 0x7f}, 8388607.0 / 8388608},
		{"s24 smallest", S24, []byte{0, 0, 0x80}, -1},
		{"s24 minus one", S24, []byte{0xff, 0xff, 0xff}, -1.0 / 8388608},
		{"s32 one", S32, []byte{1, 0, 0, 0}, 1.0 / 2147483648},
		{"s32 order of bytes", S32, []byte{0x78, 0x56, 0x34, 0x12}, 0x12345678 / 2147483648.0},
		{"s32 largest", S32, []byte{0xff, 0xff, 0xff, 0x7f}, 2147483647.0 / 2147483648},
		{"s32 smallest", S32, []byte{0, 0, 0, 0x80}, -1},
		{"f32 one", F32, []byte{0, 0, 0x80, 0x3f}, 1},
		{"f32 beyond full scale", F32, []byte{0, 0, 0x20, 0xc0}, -2.5},
		{"f32 least", F32, []byte{1, 0, 0, 0}, 0x1p-149},
		{"f32 largest", F32, []byte{0xff, 0xff, 0x7f, 0x7f}, math.MaxFloat32},
		{"f32 infinite", F32, []byte{0, 0, 0x80, 0xff}, math.Inf(-1)},
		{"f32 NaN", F32, []byte{0, 0, 0xc0, 0x7f}, math.NaN()},
		{"f32 minus zero", F32, []byte{0, 0, 0, 0x80}, math.Copysign(0, -1)},
		{"f64 one", F64, []byte{0, 0, 0, 0, 0, 0, 0xf0, 0x3f}, 1},
		{"f64 largest", F64, []byte{0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xef, 0x7f}, math.MaxFloat64},
		{"f64 infinite", F64, []byte{0, 0, 0, 0, 0, 0, 0xf0, 0x7f}, math.Inf(1)},
		{"f64 NaN with a payload", F64, []byte{5, 0, 0, 0, 0, 0, 0xf8, 0x7f}, math.Float64frombits(0x7ff8_0000_0000_0005)},
	} {
		t.Run(c.name, func(t *testing.T) {
			var dst [1]float64
			c.e.decode(dst[:], c.src)
			if same := math.Float64bits(dst[0]) == math.Float64bits(c.want); !same && !(c.e == F32 && c.want != c.want && dst[0] != dst[0]) {
				t.Errorf("%v, want %v", dst[0], c.want)
			}
		})
	}
}

// What FitsFloat32 promises, on the values with the most bits.
func TestFitsFloat32(t *testing.T) {
	most := []byte{0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xef, 0x3f}
	for e := S16; e <= F64; e++ {
		src := append([]byte(nil), most[:e.Bytes()]...)
		if e < F32 {
			src[e.Bytes()-1] = 0x7f
		} else if e == F32 {
			copy(src, []byte{0xff, 0xff, 0x7f, 0x3f})
		}
		var dst [1]float64
		e.decode(dst[:], src)
		if fits := float64(float32(dst[0])) == dst[0]; fits != e.FitsFloat32() {
			t.Errorf("%v: the sample %v fits a float32: %v", e, dst[0], fits)
		}
	}
}

package wav

import (
	"bytes"
	"testing"
)

// The headers in full, against bytes put together by hand.
func TestHeader(t *testing.T) {
	for _, c := range []struct {
		name    string
		format  format
		frames  int64
		maxRIFF uint64
		want    []byte
	}{
		{"plain", format{Float32, 2, 48000, 32}, 3, largestRIFF, join(
			sized("RIFF", 94-8+24, []byte("WAVE")), chunk("JUNK", make([]byte, 28)),
			chunk("fmt ", fields(3, 2, 48000, 8, 32), u16(0)), chunk("fact", u32(3)), sized("data", 24))},
		{"extensible", format{Float64, 3, 51200, 64}, 5, largestRIFF, join(
			sized("RIFF", 116-8+120, []byte("WAVE")), chunk("JUNK", make([]byte, 28)),
			chunk("fmt ", fields(0xFFFE, 3, 51200, 24, 64), u16(22), u16(64), u32(0), u16(3), []byte(subformat)),
			chunk("fact", u32(5)), sized("data", 120))},
		{"empty", format{Float64, 1, 1, 64}, 0, largestRIFF, join(
			sized("RIFF", 94-8, []byte("WAVE")), chunk("JUNK", make([]byte, 28)),
			chunk("fmt ", fields(3, 1, 1, 8, 64), u16(0)), chunk("fact", u32(0)), sized("data", 0))},
		// 86 + 8*536870901 = 2^32 - 2, the largest that is RIFF; one frame more is RF64.
		{"largest RIFF", format{Float64, 1, 48000, 64}, 536870901, largestRIFF, join(
			sized("RIFF", 0xFFFFFFFE, []byte("WAVE")), chunk("JUNK", make([]byte, 28)),
			chunk("fmt ", fields(3, 1, 48000, 8, 64), u16(0)), chunk("fact", u32(536870901)), sized("data", 0xFFFFFFFE-86))},
		{"smallest RF64", format{Float64, 1, 48000, 64}, 536870902, largestRIFF, join(
			sized("RF64", 0xFFFFFFFF, []byte("WAVE")), chunk("ds64", u64(1<<32+6), u64(8*536870902), u64(536870902), u32(0)),
			chunk("fmt ", fields(3, 1, 48000, 8, 64), u16(0)), chunk("fact", u32(536870902)), sized("data", 0xFFFFFFFF))},
		{"more frames than fact can say", format{Float32, 1, 48000, 32}, 1 << 32, largestRIFF, join(
			sized("RF64", 0xFFFFFFFF, []byte("WAVE")), chunk("ds64", u64(1<<34+86), u64(1<<34), u64(1<<32), u32(0)),
			chunk("fmt ", fields(3, 1, 48000, 4, 32), u16(0)), chunk("fact", u32(0xFFFFFFFF)), sized("data", 0xFFFFFFFF))},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := appendHeader(nil, c.format, c.frames, c.maxRIFF)
			if !bytes.Equal(got, c.want) {
				t.Errorf("header is\n%x\nwant\n%x", got, c.want)
			}
			if headerBytes(c.format) != len(c.want) {
				t.Errorf("headerBytes is %d, want %d", headerBytes(c.format), len(c.want))
			}
		})
	}
}

package wav

import (
	"io"
	"testing"

	"pgregory.net/rapid"
)

// Whatever chunks stand around the three that count, the samples are the same.
func TestAnyChunksAround(t *testing.T) {
	others := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) []byte {
		name := rapid.StringMatching(`[A-Z][A-Za-z]{2}[0-9]`).Draw(t, "name")
		return chunk(name, rapid.SliceOfN(rapid.Byte(), 0, 40).Draw(t, "body"))
	}), 0, 4)
	rapid.Check(t, func(rt *rapid.T) {
		e := rapid.SampledFrom(encodings).Draw(rt, "encoding")
		channels := rapid.IntRange(1, 9).Draw(rt, "channels")
		frames := rapid.IntRange(1, 60).Draw(rt, "frames")
		raw, want := pattern(e, channels*frames)
		fmtChunk := plain(tagOf[e], channels, bitsOf[e])
		if rapid.Bool().Draw(rt, "extensible") {
			fmtChunk = extensible(tagOf[e], channels, bitsOf[e], bitsOf[e])
		}
		around := func(label string) []byte { return join(others.Draw(rt, label)...) }
		content := form("RIFF", around("first"), fmtChunk, around("middle"), chunk("data", raw), around("last"))
		if rapid.Bool().Draw(rt, "64 bit") {
			content = form("RF64", ds64(uint64(len(raw)), 0), around("first"), fmtChunk, around("middle"),
				sized("data", 0xFFFFFFFF, raw, make([]byte, len(raw)%2)), around("last"))
		}
		r := mustRead(rt, content)
		if r.Channels() != channels || r.Encoding() != e || len(r.Warnings()) > 0 {
			rt.Fatalf("%d channels, %v, warnings %q", r.Channels(), r.Encoding(), r.Warnings())
		}
		got := make([]float64, len(want)+channels)
		n, err := r.Read(got)
		if err != nil {
			rt.Fatal(err)
		}
		sameBits(rt, got[:n*channels], want)
		if _, err := r.Read(got); err != io.EOF {
			rt.Fatalf("error %v at the end, want %v", err, io.EOF)
		}
	})
}

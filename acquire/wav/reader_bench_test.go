package wav

import (
	"bytes"
	"io"
	"testing"
)

// Throughput of reading, per encoding, from memory.
func BenchmarkRead(b *testing.B) {
	for _, e := range encodings {
		b.Run(e.String(), func(b *testing.B) {
			const channels = 12
			raw, _ := pattern(e, channels*100_000)
			content := form("RIFF", extensible(tagOf[e], channels, bitsOf[e], bitsOf[e]), chunk("data", raw))
			dst := make([]float64, channels*4096)
			b.SetBytes(int64(len(raw)))
			for b.Loop() {
				r, err := NewReader(bytes.NewReader(content), int64(len(content)), "run.wav")
				if err != nil {
					b.Fatal(err)
				}
				for err == nil {
					_, err = r.Read(dst)
				}
				if err != io.EOF {
					b.Fatal(err)
				}
			}
		})
	}
}

package decimate

import (
	"fmt"
	"testing"
)

// BenchmarkAppend reports how many times faster than real time a source of 48000 frames a second is
// decimated on one core, and which share of a core that takes.
func BenchmarkAppend(b *testing.B) {
	const rateHz, frames = 48000, 1024
	for _, c := range []struct{ channels, d int }{{64, 18}, {8, 18}, {64, 2}, {16, 37}, {64, 251}, {2, 18}} {
		b.Run(fmt.Sprintf("channels=%d/d=%d", c.channels, c.d), func(b *testing.B) {
			src := noise(1, frames*c.channels)
			f := New(c.d, c.channels)
			dst := make([]float64, 0, (frames/c.d+1)*c.channels)
			b.ReportAllocs()
			for b.Loop() {
				dst = f.Append(dst[:0], src)
			}
			times := float64(b.N) * frames / rateHz / b.Elapsed().Seconds()
			b.ReportMetric(times, "x-real-time")
			b.ReportMetric(100/times, "%core")
		})
	}
}

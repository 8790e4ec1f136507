package record

import "testing"

// What the recorder costs the capture: a fiftieth of a second of 64 channels at 51,200 frames/s. No
// disk is behind it, which is the worst case of one that keeps up.
func BenchmarkTee(b *testing.B) {
	const channels = 64
	r := on(&stub{forget: true}, channels, queueFrames(51200, channels))
	defer r.Close()
	s := Tee(&endless{channels: channels}, r)
	dst := make([]float64, 1024*channels)
	b.SetBytes(int64(bytesPerSample * len(dst)))
	b.ReportAllocs()
	for b.Loop() {
		s.Read(dst)
	}
}

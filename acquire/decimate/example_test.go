package decimate_test

import (
	"fmt"

	"shakerwatch/acquire/decimate"
)

// A source of two channels, both constant, comes in pieces of 100 frames; then an hour of frames
// at 48000 frames a second is lost, and the source ends.
func Example() {
	const d, channels = 18, 2
	f := decimate.New(d, channels)
	piece := make([]float64, 100*channels)
	for i := range piece {
		piece[i] = 0.5 - 0.25*float64(i%channels)
	}
	var out []float64
	for range 9 {
		out = f.Append(out, piece)
	}
	middle := out[20*channels:][:channels]
	fmt.Printf("analysis frame 20, source frame %d: %.4f\n", 20*d, middle)

	out, silent := f.AppendZeros(out, 3600*48000)
	count := int64(len(out)/channels) + silent
	count += int64(len(f.Flush(nil)) / channels)
	fmt.Printf("%d source frames gave %d analysis frames\n", 900+3600*48000, count)
	// Output:
	// analysis frame 20, source frame 360: [0.5000 0.2500]
	// 172800900 source frames gave 9600050 analysis frames
}

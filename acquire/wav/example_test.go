package wav_test

import (
	"fmt"
	"io"
	"log"
	"os"
	"path/filepath"

	"shakerwatch/acquire/wav"
)

// A recording is written and read back. A recorder calls RefreshHeader every few seconds.
func Example() {
	dir, err := os.MkdirTemp("", "wav")
	if err != nil {
		log.Fatal(err)
	}
	defer os.RemoveAll(dir)
	path := filepath.Join(dir, "run.wav")

	w, err := wav.Create(path, 51200, 2, wav.Float32)
	if err != nil {
		log.Fatal(err)
	}
	w.Write([]float64{0.5, -0.25, 0.125, 1}) // two frames of two channels
	if err := w.Close(); err != nil {        // also says what went wrong in Write
		log.Fatal(err)
	}

	r, err := wav.Open(path)
	if err != nil {
		log.Fatal(err)
	}
	defer r.Close()
	fmt.Println(r.RateHz(), r.Channels(), r.Frames(), r.Encoding())
	dst := make([]float64, 100*r.Channels())
	for {
		n, err := r.Read(dst)
		if err == io.EOF {
			break
		}
		if err != nil {
			log.Fatal(err)
		}
		fmt.Println(dst[:n*r.Channels()])
	}
	// Output:
	// 51200 2 2 IEEE float 32 bit
	// [0.5 -0.25 0.125 1]
}

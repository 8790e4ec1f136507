package record_test

import (
	"fmt"
	"log"
	"os"
	"path/filepath"
	"strings"

	"shakerwatch/acquire/pipe"
	"shakerwatch/acquire/record"
	"shakerwatch/acquire/wav"
)

// What is read from a pipe is recorded on the way. Integers of 16 bits fit float32.
func Example() {
	dir, err := os.MkdirTemp("", "record")
	if err != nil {
		log.Fatal(err)
	}
	defer os.RemoveAll(dir)
	path := filepath.Join(dir, "run.wav")

	source := pipe.New(strings.NewReader("\x00\x40\x00\xc0\x00\x20\x00\x80"), 48000, 2, pipe.S16)
	r, err := record.Create(path, record.Options{
		RateHz: source.RateHz(), Channels: source.Channels(), Encoding: wav.Float32,
		OnError: func(err error) { fmt.Fprintln(os.Stderr, err) },
	})
	if err != nil {
		log.Fatal(err)
	}
	s := record.Tee(source, r)
	dst := make([]float64, 100*s.Channels())
	for {
		n, err := s.Read(dst)
		if err != nil {
			break // io.EOF
		}
		fmt.Println("captured", dst[:n*s.Channels()])
	}
	if err := r.Close(); err != nil {
		log.Fatal(err)
	}

	recording, err := wav.Open(path)
	if err != nil {
		log.Fatal(err)
	}
	defer recording.Close()
	n, err := recording.Read(dst)
	fmt.Println("recorded", dst[:n*recording.Channels()], err)
	fmt.Printf("%+v\n", r.Counts())
	// Output:
	// captured [0.5 -0.5 0.25 -1]
	// recorded [0.5 -0.5 0.25 -1] <nil>
	// {Frames:2 Dropped:0 Bytes:16}
}

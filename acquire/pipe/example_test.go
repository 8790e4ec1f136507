package pipe_test

import (
	"fmt"
	"log"
	"strings"

	"shakerwatch/acquire/pipe"
)

// Two channels of 16-bit integers, as a program may write them into our standard input.
func Example() {
	encoding, err := pipe.ParseEncoding("s16")
	if err != nil {
		log.Fatal(err)
	}
	stdin := strings.NewReader("\x00\x40\x00\xc0\x00\x20\x00\x80\x01")
	s := pipe.New(stdin, 48000, 2, encoding)
	dst := make([]float64, 100*s.Channels())
	for {
		n, err := s.Read(dst)
		if err != nil {
			fmt.Println(err, s.Leftover())
			break
		}
		fmt.Println(dst[:n*s.Channels()])
	}
	// Output:
	// [0.5 -0.5 0.25 -1]
	// EOF 1
}

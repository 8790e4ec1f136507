package main

import (
	"bufio"
	"fmt"
	"io"
	"runtime"
	"strconv"
)

// programWord as the first argument makes this command the contestant that does the job with
// spectra: programWord RECORDING FORCES RESPONSES BLOCK BLOCKS CORES.
const programWord = "shakerwatch"

// program answers the lines on stdin as limit.c describes.
func program(args []string, stdin io.Reader, stdout io.Writer) error {
	if len(args) != 6 {
		return fmt.Errorf("%s: %d arguments: this word is for bench itself", programWord, len(args))
	}
	var numbers [5]int
	for i, arg := range args[1:] {
		n, err := strconv.Atoi(arg)
		if err != nil {
			return err
		}
		numbers[i] = n
	}
	s, blocks, cores := size{numbers[0], numbers[1], numbers[2]}, numbers[3], numbers[4]
	recording, err := readRecording(args[0], s.frames(blocks)*s.channels())
	if err != nil {
		return err
	}
	runtime.GOMAXPROCS(cores)
	j := newJob(s, recording, cores)
	defer j.workers.Close()
	fmt.Fprintf(stdout, "shakerwatch: %s %s, %d workers\n", runtime.Version(), runtime.GOARCH, cores)
	for lines := bufio.NewScanner(stdin); lines.Scan(); {
		if lines.Text() == "write" {
			if err := j.write(stdout); err != nil {
				return err
			}
			continue
		}
		n, err := strconv.Atoi(lines.Text())
		if err != nil {
			return err
		}
		for range n {
			j.run()
		}
		fmt.Fprintln(stdout, "done")
	}
	return nil
}

// write writes the densities as raw doubles.
func (j *job) write(w io.Writer) error {
	buffered := bufio.NewWriterSize(w, 1<<20)
	var raw []byte
	for _, values := range [][]complex128{j.snapshot.Gxx, j.snapshot.Gyx} {
		for _, v := range values {
			raw = appendFloats(raw[:0], []float64{real(v), imag(v)})
			if _, err := buffered.Write(raw); err != nil {
				return err
			}
		}
	}
	for _, v := range j.snapshot.Gyy {
		if _, err := buffered.Write(appendFloats(raw[:0], []float64{v})); err != nil {
			return err
		}
	}
	return buffered.Flush()
}

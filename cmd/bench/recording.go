package main

import (
	"bufio"
	"encoding/binary"
	"errors"
	"io"
	"math"
	"math/rand/v2"
	"os"
)

// writeRecording writes made-up noise as raw float64, frame by frame: every response follows one
// force, with noise of its own.
func writeRecording(path string, s size, blocks int) (err error) {
	file, err := os.Create(path)
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, file.Close()) }()
	w := bufio.NewWriterSize(file, 1<<20)
	rng := rand.New(rand.NewPCG(1, 2))
	frame := make([]float64, s.channels())
	raw := make([]byte, 0, floatBytes*len(frame))
	for range s.frames(blocks) {
		for ch := range frame {
			frame[ch] = rng.Float64() - 0.5
			if ch >= s.Forces {
				frame[ch] += 2 * frame[ch%s.Forces]
			}
		}
		if _, err := w.Write(appendFloats(raw[:0], frame)); err != nil {
			return err
		}
	}
	return w.Flush()
}

// readRecording reads the first n samples of a recording.
func readRecording(path string, n int) ([]float64, error) {
	file, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer file.Close()
	samples := make([]float64, n)
	raw := make([]byte, 1<<20)
	for rest := samples; len(rest) > 0; {
		part := rest[:min(len(rest), len(raw)/floatBytes)]
		if _, err := io.ReadFull(file, raw[:floatBytes*len(part)]); err != nil {
			return nil, err
		}
		for i := range part {
			part[i] = math.Float64frombits(binary.LittleEndian.Uint64(raw[floatBytes*i:]))
		}
		rest = rest[len(part):]
	}
	return samples, nil
}

func appendFloats(dst []byte, values []float64) []byte {
	for _, v := range values {
		dst = binary.LittleEndian.AppendUint64(dst, math.Float64bits(v))
	}
	return dst
}

package main

import (
	"encoding/binary"
	"fmt"
	"io"
	"math"
)

// compare has all contestants write their densities and returns by how much each differs from ours:
// the largest difference over the largest value of an array, the worst of the three arrays. NaN where
// a value is NaN.
func compare(s size, running [contestants]*contestant) (apart [contestants]float64, err error) {
	var results [contestants]io.Reader
	for i, c := range running {
		if results[i], err = c.results(); err != nil {
			return apart, err
		}
	}
	for _, array := range []struct {
		name   string
		values int // on a line
	}{
		{"Gxx", 2 * s.Forces * s.Forces}, {"Gyx", 2 * s.Responses * s.Forces}, {"Gyy", s.Responses},
	} {
		differences, err := compareArray(results, array.values, s.lines())
		if err != nil {
			return apart, fmt.Errorf("read %s: %w", array.name, err)
		}
		for i, d := range differences {
			apart[i] = math.Max(apart[i], d) // unlike the language's max, it is NaN for a NaN of either
		}
	}
	return apart, nil
}

// compareArray reads an array from each line by line.
func compareArray(results [contestants]io.Reader, values, lines int) (apart [contestants]float64, err error) {
	var largest float64
	var parts [contestants][]float64
	for i := range parts {
		parts[i] = make([]float64, values)
	}
	for range lines {
		for i, r := range results {
			if err := binary.Read(r, binary.LittleEndian, parts[i]); err != nil {
				return apart, err
			}
		}
		for n, v := range parts[ours] {
			largest = math.Max(largest, math.Abs(v))
			for i := range parts {
				apart[i] = math.Max(apart[i], math.Abs(parts[i][n]-v))
			}
		}
	}
	for i := range apart {
		apart[i] /= largest
	}
	return apart, nil
}

package main

import (
	"bytes"
	"strings"
	"testing"
)

// raced is a result of three rounds at the aim's size, in which a neighbour slows all down by half once.
func raced(numpy, limit float64) *result {
	r := &result{size: aimSize, blocks: 64, cores: aimCores, rounds: 3}
	for _, pace := range []float64{1, 0.5, 1} {
		r.speeds[ours] = append(r.speeds[ours], 300e6*pace)
		r.speeds[numpys] = append(r.speeds[numpys], 300e6*pace/numpy)
		r.speeds[limits] = append(r.speeds[limits], 300e6*pace/limit)
	}
	return r
}

func TestAim(t *testing.T) {
	for _, c := range []struct {
		name         string
		numpy, limit float64
		passes       bool
		failures     int // in the report
	}{
		{"both met", 5, 0.8, true, 0},
		{"just met", 4, 0.75, true, 0},
		{"NumPy too fast", 3.5, 0.8, false, 1},
		{"C too fast", 5, 0.7, false, 1},
		{"both too fast", 3.5, 0.7, false, 2},
	} {
		t.Run(c.name, func(t *testing.T) {
			r := raced(c.numpy, c.limit)
			if got := r.miss() == nil; got != c.passes {
				t.Errorf("miss: %v", r.miss())
			}
			var out bytes.Buffer
			printResult(&out, r)
			if n := strings.Count(out.String(), "FAIL"); n != c.failures {
				t.Errorf("%d failures in\n%s", n, out.String())
			}
		})
	}
}

func TestAimIsForItsSizeAndCores(t *testing.T) {
	for _, change := range []func(*result){
		func(r *result) { r.size.Block *= 4 },
		func(r *result) { r.size.Forces = 2 },
		func(r *result) { r.cores = 4 },
	} {
		r := raced(1, 0.1)
		change(r)
		if r.miss() != nil {
			t.Errorf("%v on %d cores: %v", r.size, r.cores, r.miss())
		}
	}
}

func TestMedian(t *testing.T) {
	for _, c := range []struct {
		values []float64
		want   float64
	}{{[]float64{3}, 3}, {[]float64{4, 1}, 2.5}, {[]float64{9, 1, 2}, 2}, {[]float64{4, 3, 2, 9}, 3.5}} {
		if got := median(c.values); got != c.want {
			t.Errorf("median of %v is %v, want %v", c.values, got, c.want)
		}
	}
}

// TestStandardSizes has the recordings stay within their bounds.
func TestStandardSizes(t *testing.T) {
	for _, s := range standardSizes {
		if err := s.check(); err != nil {
			t.Error(err)
		}
		blocks := s.blocks()
		if bytes := floatBytes * s.frames(blocks) * s.channels(); blocks < 8 || bytes > maxRecording {
			t.Errorf("%v: %d blocks, %d MiB", s, blocks, bytes>>20)
		}
		// To 0.39 of the block, which is the band's end at rate/2.56.
		if want := float64(s.Block) / 2.56; float64(s.lines()-1) != want && float64(s.lines()) != float64(int(want)+1) {
			t.Errorf("%v: %d lines", s, s.lines())
		}
	}
}

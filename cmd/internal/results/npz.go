package results

import (
	"archive/zip"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"time"

	"shakerwatch/cmd/internal/monitor"
)

// An array is one array of an npz file, in C order.
type array struct {
	name   string
	shape  []int
	values any // []float64, []complex128 or []int64
}

// writeEstimates writes estimates.npz.
func writeEstimates(w io.Writer, result *monitor.Result) error {
	s, e := result.Snapshot, result.Estimates
	l, p, q, k := s.Lines, s.Responses, s.Forces, len(e.ReciprocityPairs)
	pairs := make([]int64, 0, 2*k)
	for _, pair := range e.ReciprocityPairs {
		pairs = append(pairs, int64(pair[0]), int64(pair[1]))
	}
	arrays := []array{
		{"frequency", []int{l}, e.FrequencyHz},
		{"Gxx", []int{l, q, q}, s.Gxx},
		{"Gyx", []int{l, p, q}, s.Gyx},
		{"Gyy", []int{l, p}, s.Gyy},
		{"H", []int{l, p, q}, e.H},
		{"multiple_coherence", []int{l, p}, e.MultipleCoherence},
		{"partial_coherence", []int{l, p, q}, e.PartialCoherence},
		{"random_error", []int{l, p, q}, e.RandomError},
		{"confidence_radius", []int{l, p, q}, e.ConfidenceRadius},
		{"force_condition", []int{l}, e.ForceCondition},
		{"force_condition_raw", []int{l}, e.ForceConditionRaw},
		{"force_coherence", []int{l, q}, e.ForceCoherence},
		{"principal_forces", []int{l, q}, e.PrincipalForces},
		{"reciprocity_pairs", []int{k, 2}, pairs},
		{"reciprocity_error", []int{l, k}, e.ReciprocityError},
		{"effective_averages", []int{}, []float64{e.EffectiveAverages}},
		{"drift", []int{p, q}, result.Drift.Ratio},
	}
	if d := result.Distortion; d != nil {
		arrays = append(arrays,
			array{"noise_force", []int{l, q}, d.NoiseForce},
			array{"noise_response", []int{l, p}, d.NoiseResponse},
			array{"distortion_response", []int{l, p}, d.DistortionResponse},
			array{"distortion_chance", []int{l, p}, d.Chance},
		)
	}
	if result.DecayDB != nil {
		arrays = append(arrays, array{"decay_db", []int{q + p}, result.DecayDB})
	}
	return writeNPZ(w, arrays)
}

// stamp is the time that every member bears, so that equal results are equal bytes. It is the
// earliest that a zip file can hold.
var stamp = time.Date(1980, 1, 1, 0, 0, 0, 0, time.UTC)

// writeNPZ writes arrays in NumPy's open format: a zip file of uncompressed .npy members, version
// 1.0 as laid down in the NumPy manual (numpy.lib.format).
func writeNPZ(w io.Writer, arrays []array) error {
	archive := zip.NewWriter(w)
	for _, a := range arrays {
		header := &zip.FileHeader{Name: a.name + ".npy", Method: zip.Store}
		header.Modified = stamp
		member, err := archive.CreateHeader(header)
		if err != nil {
			return err
		}
		if err := a.write(member); err != nil {
			return fmt.Errorf("array %s: %w", a.name, err)
		}
	}
	return archive.Close()
}

func (a array) write(w io.Writer) error {
	var descr string
	var n int
	switch v := a.values.(type) {
	case []float64:
		descr, n = "<f8", len(v)
	case []complex128:
		descr, n = "<c16", len(v)
	case []int64:
		descr, n = "<i8", len(v)
	}
	size := 1
	for _, d := range a.shape {
		size *= d
	}
	if n != size {
		return fmt.Errorf("%d values for shape %v", n, a.shape)
	}
	if _, err := io.WriteString(w, npyHeader(descr, a.shape)); err != nil {
		return err
	}
	return writeValues(w, a.values)
}

// npyHeader is magic, version, length and the description padded with blanks so that the values
// begin at a multiple of 64.
func npyHeader(descr string, shape []int) string {
	var dims strings.Builder
	for _, d := range shape {
		dims.WriteString(strconv.Itoa(d) + ", ")
	}
	text := fmt.Sprintf("{'descr': '%s', 'fortran_order': False, 'shape': (%s), }", descr, strings.TrimSuffix(dims.String(), " "))
	const before = len("\x93NUMPY\x01\x00") + 2
	text += strings.Repeat(" ", 63-(before+len(text))%64) + "\n"
	length := binary.LittleEndian.AppendUint16(nil, uint16(len(text)))
	return "\x93NUMPY\x01\x00" + string(length) + text
}

// writeValues writes values as NumPy's little-endian types, some thousand at a time.
func writeValues(w io.Writer, values any) error {
	const atOnce = 8192
	var buf []byte
	flush := func(limit int) error {
		if len(buf) < limit {
			return nil
		}
		_, err := w.Write(buf)
		buf = buf[:0]
		return err
	}
	put := func(bits uint64) error {
		buf = binary.LittleEndian.AppendUint64(buf, bits)
		return flush(8 * atOnce)
	}
	switch values := values.(type) {
	case []float64:
		for _, v := range values {
			if err := put(floatBits(v)); err != nil {
				return err
			}
		}
	case []complex128:
		for _, v := range values {
			if err := put(floatBits(real(v))); err != nil {
				return err
			}
			if err := put(floatBits(imag(v))); err != nil {
				return err
			}
		}
	case []int64:
		for _, v := range values {
			if err := put(uint64(v)); err != nil {
				return err
			}
		}
	}
	return flush(1)
}

// floatBits are the bits of v, with one NaN for all: which one the arithmetic happened to make must
// not show in the file.
func floatBits(v float64) uint64 {
	if math.IsNaN(v) {
		return 0x7ff8_0000_0000_0000
	}
	return math.Float64bits(v)
}

// parseFloats reads the values of a .npy member of type <f8 in C order, whatever its shape. The
// library that the tests use for this panics on some damaged files.
func parseFloats(npy []byte) ([]float64, error) {
	const before = len("\x93NUMPY\x01\x00") + 2
	if len(npy) < before || string(npy[:before-2]) != "\x93NUMPY\x01\x00" {
		return nil, errors.New("no .npy of version 1.0")
	}
	length := int(binary.LittleEndian.Uint16(npy[before-2:]))
	if len(npy) < before+length {
		return nil, errors.New("it ends within its header")
	}
	header, values := string(npy[before:before+length]), npy[before+length:]
	if !strings.Contains(header, "'<f8'") || !strings.Contains(header, "'fortran_order': False") {
		return nil, fmt.Errorf("header %q is not that of <f8 in C order", strings.TrimSpace(header))
	}
	if len(values)%bytesPerValue != 0 {
		return nil, errors.New("it ends within a value")
	}
	floats := make([]float64, len(values)/bytesPerValue)
	for i := range floats {
		floats[i] = math.Float64frombits(binary.LittleEndian.Uint64(values[bytesPerValue*i:]))
	}
	return floats, nil
}

package results

import (
	"archive/zip"
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"os"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate/setup"
)

// A Noise is a noise measurement that was read from a file.
type Noise struct {
	Name   string `json:"name"`   // of the file, as given
	SHA256 string `json:"sha256"` // of its content

	densities *setup.Noise
}

// Densities are the noise measurement itself, nil without one.
func (n *Noise) Densities() *setup.Noise {
	if n == nil {
		return nil
	}
	return n.densities
}

// arrays are the arrays of noise.npz and where they go.
func arrays(n *setup.Noise) []struct {
	name   string
	values *[]float64
} {
	return []struct {
		name   string
		values *[]float64
	}{
		{"frequency", &n.FrequencyHz},
		{"noise_force", &n.Force},
		{"noise_response", &n.Response},
		{"muted_force", &n.MutedForce},
		{"muted_response", &n.MutedResponse},
	}
}

// writeNoise writes noise.npz.
func writeNoise(w io.Writer, n *setup.Noise) error {
	l := len(n.FrequencyHz)
	var list []array
	for _, a := range arrays(n) {
		shape := []int{l, len(*a.values) / l}
		if a.values == &n.FrequencyHz {
			shape = []int{l}
		}
		list = append(list, array{a.name, shape, *a.values})
	}
	return writeNPZ(w, list)
}

// noiseOverhead is more than what a noise file has besides its values.
const noiseOverhead = 64 << 10

// ReadNoise reads a noise.npz that a setup check wrote and checks that it fits r.
func ReadNoise(path string, r *rig.Rig) (*Noise, error) {
	const remedy = "give the noise.npz of a setup check of this rig"
	file, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("%s: %w: %s", path, cause(err), remedy)
	}
	defer file.Close()
	most := int64(bytesPerValue*r.Grid.Lines*(1+2*len(r.Forces)+2*len(r.Responses)) + noiseOverhead)
	text, err := io.ReadAll(io.LimitReader(file, most+1))
	if err != nil {
		return nil, fmt.Errorf("%s: %w: %s", path, cause(err), remedy)
	}
	if int64(len(text)) > most {
		return nil, fmt.Errorf("%s: it is larger than the noise of %s can be: %s", path, r.Path, remedy)
	}
	densities, err := parseNoise(text, most)
	if err == nil {
		err = densities.Check(r)
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w: %s", path, oneLine(err), remedy)
	}
	sum := sha256.Sum256(text)
	return &Noise{Name: path, SHA256: hex.EncodeToString(sum[:]), densities: densities}, nil
}

const bytesPerValue = 8

// parseNoise reads the arrays of a noise file. Nothing that unpacks to more than most bytes is
// unpacked.
func parseNoise(text []byte, most int64) (*setup.Noise, error) {
	z, err := zip.NewReader(bytes.NewReader(text), int64(len(text)))
	if err != nil {
		return nil, fmt.Errorf("no npz file (%w)", err)
	}
	n := &setup.Noise{}
	for _, a := range arrays(n) {
		member, err := z.Open(a.name + ".npy")
		if err != nil {
			return nil, fmt.Errorf("it has no array %s", a.name)
		}
		content, err := io.ReadAll(io.LimitReader(member, most))
		member.Close()
		if err != nil {
			return nil, fmt.Errorf("array %s: %w", a.name, err)
		}
		if *a.values, err = parseFloats(content); err != nil {
			return nil, fmt.Errorf("array %s: %w", a.name, err)
		}
	}
	return n, nil
}

// oneLine joins the lines of an error.
func oneLine(err error) error {
	return fmt.Errorf("%s", bytes.ReplaceAll([]byte(err.Error()), []byte("\n"), []byte("; ")))
}

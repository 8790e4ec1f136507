package setup

import (
	"errors"
	"fmt"
	"math"

	"shakerwatch/acquire/rig"
)

// Noise is what a setup check has found about the noise of a rig's channels, for a later run of the
// same rig. Arrays lie line by line; L, q and p are the numbers of lines, forces and responses. Each
// field names the array of a noise file that it is written to and read from.
type Noise struct {
	FrequencyHz []float64 // frequency (L)

	// With the amplifiers on at zero drive; NaN when that was not measured.
	Force    []float64 // noise_force (L,q) N²/Hz
	Response []float64 // noise_response (L,p) (m/s²)²/Hz

	// With the amplifiers muted; NaN when that was not measured.
	MutedForce    []float64 // muted_force (L,q) N²/Hz
	MutedResponse []float64 // muted_response (L,p) (m/s²)²/Hz
}

// NewNoise takes the densities out of the measurements of r with the shakers off. Those of a channel
// that was dead or railed are NaN. It panics where Findings does.
func NewNoise(r *rig.Rig, m ...Measurement) *Noise {
	c := newCheck(r, m)
	n := &Noise{}
	for k := range r.Grid.Lines {
		n.FrequencyHz = append(n.FrequencyHz, float64(k)*r.Grid.SpacingHz)
	}
	q := len(r.Forces)
	n.Force, n.Response = c.densities(Idle, 0, q), c.densities(Idle, q, len(c.channels))
	n.MutedForce, n.MutedResponse = c.densities(Muted, 0, q), c.densities(Muted, q, len(c.channels))
	return n
}

// densities are those of channels from to before-1, line by line.
func (c *check) densities(s Stage, from, before int) []float64 {
	list := make([]float64, 0, c.rig.Grid.Lines*(before-from))
	for k := range c.rig.Grid.Lines {
		for ch := from; ch < before; ch++ {
			v := math.NaN()
			if c.measured(s) && c.carries(s, ch) {
				v = c.density(s, ch, k)
			}
			list = append(list, v)
		}
	}
	return list
}

// Check says whether n, which may come from a file, fits r: the same lines, the same numbers of
// channels, and densities that can be some. The error has a line for each thing that differs, and
// what to do. It cannot tell whether sensors and gains are still the same.
func (n *Noise) Check(r *rig.Rig) error {
	lines, q, p := len(n.FrequencyHz), len(r.Forces), len(r.Responses)
	if err := n.checkLines(r); err != nil {
		return err // without the lines, nothing else can be counted
	}
	var all []error
	for _, a := range []struct {
		name, kind string
		values     []float64
		want       int
	}{
		{"noise_force", "forces", n.Force, q},
		{"noise_response", "responses", n.Response, p},
		{"muted_force", "forces", n.MutedForce, q},
		{"muted_response", "responses", n.MutedResponse, p},
	} {
		all = append(all, checkDensities(a.name, a.kind, a.values, lines, a.want))
	}
	return errors.Join(all...)
}

const remeasure = "measure the noise of this rig again with --setup"

func (n *Noise) checkLines(r *rig.Rig) error {
	lines, g := len(n.FrequencyHz), r.Grid
	if lines != g.Lines {
		return fmt.Errorf("noise: %d lines%s, but the rig file has %d lines %.6g Hz apart: %s, or take back its [analysis]",
			lines, n.apart(), g.Lines, g.SpacingHz, remeasure)
	}
	const tolerance = 1e-9 // relative, as for all spacings of a rig file
	for k, hz := range n.FrequencyHz {
		want := float64(k) * g.SpacingHz
		if !(math.Abs(hz-want) <= tolerance*want) {
			return fmt.Errorf("noise: line %d at %.9g Hz, but the rig file has it at %.9g Hz: %s, or take back its [analysis]", k, hz, want, remeasure)
		}
	}
	return nil
}

// apart says how far apart the lines are, where there are two.
func (n *Noise) apart() string {
	if len(n.FrequencyHz) < 2 {
		return ""
	}
	return fmt.Sprintf(" %.6g Hz apart", n.FrequencyHz[1]-n.FrequencyHz[0])
}

func checkDensities(name, kind string, values []float64, lines, want int) error {
	if len(values) != lines*want {
		if len(values)%lines != 0 {
			return fmt.Errorf("noise: %s has %d values, no whole number for each of %d lines: %s", name, len(values), lines, remeasure)
		}
		return fmt.Errorf("noise: %s has %d %s, but the rig file has %d: %s, or take the rig file that it was measured with",
			name, len(values)/lines, kind, want, remeasure)
	}
	for n, v := range values {
		if v < 0 || math.IsInf(v, 0) {
			return fmt.Errorf("noise: %s holds %g at line %d, which is no density: %s", name, v, n/want, remeasure)
		}
	}
	return nil
}

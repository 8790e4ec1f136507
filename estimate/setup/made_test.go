package setup

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"shakerwatch/acquire/rig"
	"shakerwatch/estimate"
	"shakerwatch/spectra"
)

// madeRig is an invented rig with two shakers and five accelerometers: block 1024, lines 2.5 Hz apart.
// The accelerometer at S2 faces down.
const madeRig = `
[source]
kind = "pipe"
rate = 2560
full_scale = 10.0
[analysis]
max_frequency = 1000.0
min_frequency = 20.0
line_spacing = 2.5
[[force]]
channel = 1
name = "S1"
point = "1"
axis = "+z"
sensitivity = 0.01
[[force]]
channel = 2
name = "S2"
point = "2"
axis = "+z"
sensitivity = 0.01
[[response]]
channel = 3
name = "A1z"
point = "1"
axis = "+z"
sensitivity = 0.1
[[response]]
channel = 4
name = "A2z"
point = "2"
axis = "-z"
sensitivity = 0.1
[[response]]
channel = 5
name = "A3z"
point = "3"
axis = "+z"
sensitivity = 0.1
[[response]]
channel = 6
name = "A4x"
point = "4"
axis = "+x"
sensitivity = 0.1
[[response]]
channel = 7
name = "A5g"
point = "5"
axis = "+y"
unit = "g"
sensitivity = 1.0
`

// Channels of madeRig, and how long its stages are.
const (
	chS1 = iota
	chS2
	chA1z
	chA2z
	chA3z
	chA4x
	chA5g
	madeChannels

	madeFrames = 1024 + 19*512 // 20 blocks
)

func parseRig(t testing.TB, text string) *rig.Rig {
	t.Helper()
	r, err := rig.Parse("rig.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// A scene is what the channels of a rig see during a stage, in N and m/s², channel by channel.
type scene [][]float64

// Noise of the made channels, N or m/s² rms from 0 Hz to half the rate.
const (
	madeForceNoise    = 0.02
	madeResponseNoise = 0.002
)

// quiet is a scene with the shakers off.
func quiet(seed uint64, frames int) scene {
	rng := rand.New(rand.NewPCG(seed, 1))
	s := make(scene, madeChannels)
	for ch := range s {
		s[ch] = make([]float64, frames)
		s.hiss(rng, ch, []float64{madeForceNoise, madeResponseNoise}[min(ch/2, 1)])
	}
	return s
}

// driven is a scene with the shakers on low. Each shaker pushes 20 N rms of white noise, unless spoilt,
// into a mass of its own on a spring, of which the other feels a little; the rest hear both.
func driven(seed uint64, frames int, spoil ...func(forces scene)) scene {
	rng := rand.New(rand.NewPCG(seed, 2))
	s := quiet(seed+1, frames)
	forces := scene{make([]float64, frames), make([]float64, frames)}
	forces.hiss(rng, chS1, 20)
	forces.hiss(rng, chS2, 20)
	for _, spoil := range spoil {
		spoil(forces)
	}
	first, second := newMass(120, 10, 0.05), newMass(310, 8, 0.05)
	for n := range frames {
		x1, x2 := forces[chS1][n], forces[chS2][n]
		y1, y2 := first.next(x1), second.next(x2)
		s[chS1][n] += x1
		s[chS2][n] += x2
		s[chA1z][n] += y1 + 0.2*y2
		s[chA2z][n] -= y2 + 0.2*y1 // faces down
		s[chA3z][n] += 0.5*y1 - 0.8*y2
		s[chA4x][n] += 0.7*y1 + 0.6*y2
		s[chA5g][n] += 0.9*y1 + 0.3*y2
	}
	return s
}

// hiss adds white noise to a channel.
func (s scene) hiss(rng *rand.Rand, ch int, rms float64) {
	for n := range s[ch] {
		s[ch][n] += rms * rng.NormFloat64()
	}
}

// tone adds a sine to a channel of madeRig.
func (s scene) tone(ch int, hz, amplitude float64) {
	for n := range s[ch] {
		s[ch][n] += amplitude * math.Sin(2*math.Pi*hz*float64(n)/2560+0.3)
	}
}

// A mass on a spring and a damper, excited by a force: its acceleration, by the bilinear transform of
// s²/(m s² + c s + k), which keeps the sign of the power flow.
type mass struct{ b, a1, a2, x1, x2, y1, y2 float64 }

func newMass(hz, kg, damping float64) *mass {
	w := 2 * math.Pi * hz
	g := 2 * 2560.0
	a0 := kg * (g*g + 2*damping*w*g + w*w)
	return &mass{
		b:  g * g / a0,
		a1: kg * (2*w*w - 2*g*g) / a0,
		a2: kg * (g*g - 2*damping*w*g + w*w) / a0,
	}
}

func (m *mass) next(x float64) float64 {
	y := m.b*(x-2*m.x1+m.x2) - m.a1*m.y1 - m.a2*m.y2
	m.x1, m.x2, m.y1, m.y2 = x, m.x1, y, m.y1
	return y
}

// digital are the frames of a scene as captured through the channels of r, rounded to float32 as
// recordings are and clipped at full scale.
func (s scene) digital(r *rig.Rig) []float64 {
	frames := make([]float64, 0, len(s)*len(s[0]))
	channels := r.Channels()
	for n := range s[0] {
		for ch, c := range channels {
			v := s[ch][n] / c.Scale()
			frames = append(frames, float64(float32(max(-1, min(1-0x1p-24, v)))))
		}
	}
	return frames
}

// measure takes captured frames through tally and average, as the pipeline does where it need not
// decimate.
func measure(t testing.TB, r *rig.Rig, s Stage, frames []float64) Measurement {
	t.Helper()
	if r.Grid.Decimation != 1 {
		t.Fatal("the made pipeline does not decimate")
	}
	tally := NewTally(r)
	tally.Add(frames)

	shape, n := estimate.ShapeOf(r), len(r.Channels())
	values := spectra.Window(r.Analysis.Window).Values(r.Grid.Block)
	average := spectra.NewAverage(shape, values, r.Grid.Hop, 1, r.Grid.RateHz, spectra.Averaging{})
	transform := spectra.NewTransform(values)
	cutter := spectra.NewCutter(n, r.Grid.Block, r.Grid.Hop)
	block := spectra.NewBlock(shape, r.Grid.Block, 0)
	scaled := slices.Clone(frames)
	for ch, c := range r.Channels() {
		for i := ch; i < len(scaled); i += n {
			scaled[i] *= c.Scale()
		}
	}
	for len(scaled) > 0 {
		scaled = scaled[cutter.Put(scaled, false):]
		if !cutter.Full() {
			break
		}
		cutter.CopyTo(block.Samples)
		for ch := range n {
			transform.ChannelTo(block.Lines, ch, n, block.Samples[ch*r.Grid.Block:][:r.Grid.Block])
		}
		average.Sum([][]complex128{block.Lines}, 0, shape.Lines)
		average.Count(cutter.Index() * int64(r.Grid.Hop))
		cutter.Advance()
	}
	snapshot := spectra.NewSnapshot(shape, spectra.Averaging{})
	average.SnapshotTo(snapshot)
	return Measurement{Stage: s, Snapshot: snapshot, Tally: tally}
}

// A trial is the three stages of a made rig before they are captured.
type trial struct{ muted, idle, low scene }

func newTrial(seed uint64) *trial {
	return &trial{quiet(10*seed, madeFrames), quiet(10*seed+3, madeFrames), driven(10*seed+6, madeFrames)}
}

// all are its scenes.
func (s *trial) all() []scene { return []scene{s.muted, s.idle, s.low} }

func (s *trial) measure(t testing.TB, r *rig.Rig) []Measurement {
	t.Helper()
	var list []Measurement
	for stage, scene := range s.all() {
		list = append(list, measure(t, r, Stage(stage), scene.digital(r)))
	}
	return list
}

// flagged are the findings that are more than info, in short.
func flagged(findings []Finding) []string {
	list := []string{}
	for _, f := range findings {
		if f.Severity > Info {
			list = append(list, fmt.Sprintf("%v %v %s %v", f.Severity, f.Stage, f.Kind, f.Channels))
		}
	}
	return list
}

// find is the one finding of a kind about a channel in a stage.
func find(t testing.TB, findings []Finding, s Stage, kind Kind, channel string) Finding {
	t.Helper()
	var all []Finding
	for _, f := range findings {
		if f.Stage == s && f.Kind == kind && (len(f.Channels) > 0 && f.Channels[0] == channel || len(f.Channels) == 0 && channel == "") {
			all = append(all, f)
		}
	}
	if len(all) != 1 {
		t.Fatalf("%d findings of %s about %q with %v, want one of %v", len(all), kind, channel, s, findings)
	}
	return all[0]
}

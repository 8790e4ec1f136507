package demo

import (
	"encoding/binary"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"

	"shakerwatch/acquire/rig"
)

// RandomOptions narrow what NewRandomRig draws. What is zero is drawn, but for the last two.
type RandomOptions struct {
	Shape     string // "beam" or "plate"
	Drive     string // "current" or "voltage"
	Shakers   int    // 1 to 4
	Responses int    // 3 to 12, at least as many as shakers

	Excitation     string  // "random", "burst" or "periodic"; empty is random
	MaxFrequencyHz float64 // 10 to 2000; 0 is 200
}

// A RandomRig is a light structure drawn at random, with weak shakers and sensors: a test piece that no
// one has tuned a method on. Every force has a driving-point response. It is read-only.
type RandomRig struct {
	Rig  *rig.Rig
	Text []byte // of the rig file
	Name string // of what it is, such as "plate of 8.1 kg, 2 shakers on voltage"

	structure *structure
	shakers   map[string]shaker // by name of the force
	floors    map[string]floor  // by name of the channel
}

// NewRandomRig draws a rig from seed. Its band is low, so that it runs some hundred times as fast as real time.
//
// The error says which option cannot be had.
func NewRandomRig(seed uint64, o RandomOptions) (*RandomRig, error) {
	rng := rigStream(seed)
	if err := o.fill(rng); err != nil {
		return nil, err
	}
	r := &RandomRig{shakers: make(map[string]shaker), floors: make(map[string]floor)}
	var massKg float64
	r.structure, massKg = randomStructure(rng, o.Shape, o.MaxFrequencyHz)
	r.Name = fmt.Sprintf("%s of %.1f kg, %d shakers on %s", o.Shape, massKg, o.Shakers, o.Drive)
	channels := r.drawChannels(rng, &o)
	for _, c := range channels[:o.Shakers] {
		r.shakers[c.Name] = randomShaker(rng, o.Drive, o.MaxFrequencyHz, massKg)
	}
	if err := r.read(&o, channels); err != nil {
		return nil, err
	}
	if err := r.calibrate(rng, &o, channels); err != nil {
		return nil, err
	}
	return r, r.read(&o, channels)
}

// rigStream returns random numbers for a rig. Unlike those of stream they are as different for seeds in a row as
// for any two.
func rigStream(seed uint64) *rand.Rand {
	key := [32]byte{8: 'r', 'i', 'g'}
	binary.LittleEndian.PutUint64(key[:], seed)
	return rand.New(rand.NewChaCha8(key))
}

// fill draws what is left open, always as often, so that an option given leaves the rest as it was.
func (o *RandomOptions) fill(rng *rand.Rand) error {
	shape, drive := []string{"beam", "plate"}[rng.IntN(2)], []string{"current", "voltage"}[rng.IntN(2)]
	shakers, responses := 1+rng.IntN(4), 3+rng.IntN(10)
	set := func(given *string, drawn string) {
		if *given == "" {
			*given = drawn
		}
	}
	set(&o.Shape, shape)
	set(&o.Drive, drive)
	set(&o.Excitation, "random")
	if o.Shakers == 0 {
		o.Shakers = shakers
	}
	if o.Responses == 0 {
		o.Responses = max(responses, o.Shakers)
	}
	if o.MaxFrequencyHz == 0 {
		o.MaxFrequencyHz = 200
	}
	switch {
	case o.Shape != "beam" && o.Shape != "plate":
		return fmt.Errorf("random rig: shape %q: choose beam or plate", o.Shape)
	case o.Drive != "current" && o.Drive != "voltage":
		return fmt.Errorf("random rig: drive %q: choose current or voltage", o.Drive)
	case !slices.Contains([]string{"random", "burst", "periodic"}, o.Excitation):
		return fmt.Errorf("random rig: excitation %q: choose random, burst or periodic", o.Excitation)
	case o.Shakers < 1 || o.Shakers > 4:
		return fmt.Errorf("random rig: %d shakers: choose 1 to 4", o.Shakers)
	case o.Responses < max(3, o.Shakers) || o.Responses > 12:
		return fmt.Errorf("random rig: %d responses with %d shakers: choose %d to 12", o.Responses, o.Shakers, max(3, o.Shakers))
	case !(o.MaxFrequencyHz >= 10 && o.MaxFrequencyHz <= 2000):
		return fmt.Errorf("random rig: max frequency %g Hz: choose 10 to 2000", o.MaxFrequencyHz)
	}
	return nil
}

// randomShaker draws a weak shaker for a structure of some mass: its armature weighs up to a
// seventh of that, and resonates in its flexures below the band's middle. The stinger puts the
// armature's resonance against a blocked cell at three to six times the band. All our own choice
// within what small shakers have.
func randomShaker(rng *rand.Rand, drive string, topHz, massKg float64) shaker {
	armatureKg := massKg * uniform(rng, 0.03, 0.15)
	flexureRad := 2 * math.Pi * topHz * uniform(rng, 0.05, 0.2)
	stingerRad := 2 * math.Pi * topHz * uniform(rng, 3, 6)
	sh := shaker{
		forceNPerA:    uniform(rng, 6, 16),
		armatureKg:    armatureKg,
		flexureNPerM:  armatureKg * flexureRad * flexureRad,
		flexureNSPerM: 2 * 0.05 * armatureKg * flexureRad,
		stingerNPerM:  armatureKg * stingerRad * stingerRad,
		stingerNSPerM: 2 * 0.01 * armatureKg * stingerRad,
		driveRMS:      uniform(rng, 0.3, 1),
	}
	if drive == "voltage" {
		sh.coilOhm = uniform(rng, 0.5, 2)
		sh.driveRMS *= sh.coilOhm // the same force on an armature that is held
	}
	return sh
}

// drawChannels draws where forces and responses stand. Shakers and sensors of a beam lie across it, shakers of a
// plate push along z.
func (r *RandomRig) drawChannels(rng *rand.Rand, o *RandomOptions) (channels []rig.Channel) {
	sign := func() string { return string("+-"[rng.IntN(2)]) }
	places := rng.Perm(randomPoints)
	letters := map[string]string{"beam": "yz", "plate": "z"}[o.Shape]
	add := func(name, point, axis, unit string) {
		channels = append(channels, rig.Channel{
			Index: len(channels), Name: name, Point: point, Axis: axis, Unit: unit, Sensitivity: 1,
		})
	}
	for i := range o.Shakers {
		add("S"+strconv.Itoa(i+1), r.structure.points[places[i]], sign()+string(letters[rng.IntN(len(letters))]), "N")
	}
	if o.Shape == "plate" {
		letters = "zzzxy" // most sensors where the plate moves most
	}
	for i := range o.Responses {
		point, letter := r.structure.points[places[i]], string(letters[rng.IntN(len(letters))])
		if i < o.Shakers { // the driving points first
			letter = channels[i].Letter()
		}
		add("A"+point+letter, point, sign()+letter, "m/s^2")
	}
	return channels
}

// read makes the rig of channels, by way of a rig file.
func (r *RandomRig) read(o *RandomOptions, channels []rig.Channel) (err error) {
	r.Text = []byte(randomText(r.Name, o, channels))
	r.Rig, err = rig.Parse("random.toml", r.Text)
	return err
}

// randomFullScaleV is the full scale of a random rig's channels.
const randomFullScaleV = 10

// randomText is the rig file. A block is 4096 samples whatever the band.
func randomText(title string, o *RandomOptions, channels []rig.Channel) string {
	const block = 4096
	rateHz := 2.56 * o.MaxFrequencyHz
	var b strings.Builder
	fmt.Fprintf(&b, "title = %q\n\n[source]\nkind = \"demo\"\nrate = %.10g\nfull_scale = %g\n\n", title, rateHz, float64(randomFullScaleV))
	fmt.Fprintf(&b, "[analysis]\nmax_frequency = %.10g\nmin_frequency = %.10g\nexcitation = %q\n",
		o.MaxFrequencyHz, 0.05*o.MaxFrequencyHz, o.Excitation)
	switch spacing := fmt.Sprintf("line_spacing = %.10g\n", rateHz/block); o.Excitation {
	case "random":
		b.WriteString(spacing)
	case "burst":
		fmt.Fprintf(&b, "%s\n[burst]\nperiod_s = %.12g\n", spacing, block/rateHz)
	case "periodic":
		fmt.Fprintf(&b, "\n[periodic]\nperiod = %d\nsettle_periods = 2\nkeep_periods = 3\n", block)
	}
	for _, c := range channels {
		kind := "response"
		if c.Unit == "N" {
			kind = "force"
		}
		fmt.Fprintf(&b, "\n[[%s]]\nchannel = %d\nname = %q\npoint = %q\naxis = %q\nunit = %q\nsensitivity = %.3g\n",
			kind, c.Index+1, c.Name, c.Point, c.Axis, c.Unit, c.Sensitivity)
	}
	return b.String()
}

// calibrate chooses sensitivities so that no channel clips and none is lost in its last bits, and the noise of
// each sensor from what it will measure.
func (r *RandomRig) calibrate(rng *rand.Rand, o *RandomOptions, channels []rig.Channel) error {
	levels, err := r.levels(rng.Uint64(), o)
	if err != nil {
		return err
	}
	for i := range channels {
		// peaks of Gaussian noise reach 13 dB above the rms, 4.5 times
		headroomDB, noiseDB := uniform(rng, 17, 26), uniform(rng, 50, 70)
		channels[i].Sensitivity = randomFullScaleV / levels[i] * math.Pow(10, -headroomDB/20)
		density := levels[i] * math.Pow(10, -noiseDB/20) / math.Sqrt(o.MaxFrequencyHz)
		r.floors[channels[i].Name] = floor{density: density, rise: 20, cornerHz: o.MaxFrequencyHz / 1000}
	}
	return nil
}

// levels runs the rig for two blocks and returns the rms of each output while its drives run, N or m/s².
func (r *RandomRig) levels(seed uint64, o *RandomOptions) ([]float64, error) {
	s, err := r.Source(r.Rig, seed)
	if err != nil {
		return nil, err
	}
	sums := make([]float64, len(s.outputs))
	frame := make([]float64, s.channels)
	frames := 2 * r.Rig.Grid.Block
	for range frames {
		s.frame(frame)
		for i, v := range s.outputs {
			sums[i] += v * v
		}
	}
	driven := float64(frames)
	if o.Excitation == "burst" {
		driven *= burstShare // what rings on makes the rms a little too large, on the safe side
	}
	for i := range sums {
		sums[i] = math.Sqrt(sums[i] / driven)
	}
	return sums, nil
}

// layout is where the channels of a rig stand, with the shakers and noise that were drawn for them.
func (r *RandomRig) layout(of *rig.Rig) (layout, error) {
	l, err := newLayout(of, r.structure)
	if err != nil {
		return l, err
	}
	for i, c := range of.Forces {
		if sh, ok := r.shakers[c.Name]; ok {
			l.shakers[i].shaker = sh
		}
	}
	for i, c := range of.Channels() {
		l.floors[i] = r.floors[c.Name]
	}
	return l, nil
}

// Source returns a source for a rig on the structure, as New does for the skid: r.Rig, or one with
// other settings or fewer channels. A force of another name is driven by the skid's shaker, and a
// channel of another name has no noise.
func (r *RandomRig) Source(of *rig.Rig, seed uint64) (*Source, error) {
	l, err := r.layout(of)
	if err != nil {
		return nil, err
	}
	return start(of, l, seed)
}

// Truth returns the truth about r.Rig.
func (r *RandomRig) Truth() *Truth {
	l, err := r.layout(r.Rig)
	if err != nil {
		panic("demo: a random rig does not fit its structure: " + err.Error())
	}
	return &Truth{l, r.Rig.Forces, r.Rig.Responses, r.Rig.Analysis.MaxFrequencyHz}
}

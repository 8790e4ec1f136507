package rig

import "math"

const (
	// maxChannels is what the header of a recording can count: 16 bits (RIFF WAVE, nChannels).
	maxChannels = math.MaxUint16

	// maxRateHz is what the header of a recording can hold: 32 bits (RIFF WAVE, nSamplesPerSec).
	maxRateHz = math.MaxUint32

	// maxCount bounds every other integer, so that it fits everywhere and products of two fit
	// into 64 bits.
	maxCount = math.MaxInt32

	// maxPeriods bounds counts of periods, so that periods times frames fit into 64 bits with
	// room to spare. Common practice, no source, is some ten.
	maxPeriods = 1_000_000

	// maxScale bounds N or m/s² at digital full scale, and its inverse bounds them from below:
	// squares of power spectra stay well inside float64.
	maxScale = 1e30

	// maxWaitS bounds times, so that they can be counted in frames: a day.
	maxWaitS = 86_400
)

var (
	wholeRate = bound{
		func(v float64) bool { return v >= 1 && v <= maxRateHz && v == math.Trunc(v) },
		"give whole frames per second, as a recording states them",
	}
	duration = bound{func(v float64) bool { return v > 0 && v <= maxWaitS }, "give seconds above 0, at most a day"}
	lead     = bound{func(v float64) bool { return v >= 0 && v <= maxWaitS }, "give seconds from 0, at most a day"}
)

// build reads the whole tree into a rig. The rig is of use only when nothing was reported.
func build(root *table, rep *report) *Rig {
	top := &section{rep: rep, line: 1, table: root}
	r := &Rig{Path: rep.path}
	top.words("title", &r.Title)
	f := &file{
		rig:      r,
		source:   top.section("source"),
		analysis: top.section("analysis"),
		burst:    top.section("burst"),
		periodic: top.section("periodic"),
	}
	r.Source = readSource(f.source)
	r.Analysis = readAnalysis(f.analysis)
	r.Burst = readBurst(f.burst)
	r.Periodic = readPeriodic(f.periodic)
	r.Target = readTarget(top.section("target"))
	r.OnFault = readWatch(top.section("watch"))
	f.forces = top.sections("force")
	f.responses = top.sections("response")
	f.points = top.sections("point")
	for _, s := range f.forces {
		r.Forces = append(r.Forces, f.readChannel(s, "N"))
	}
	for _, s := range f.responses {
		r.Responses = append(r.Responses, f.readChannel(s, "m/s^2", "g"))
	}
	for _, s := range f.points {
		r.Points = append(r.Points, readPoint(s))
	}
	top.done()
	f.check(top)
	if !rep.unread {
		f.resolve()
	}
	return r
}

func readSource(s *section) Source {
	v := Source{Kind: "soundcard", RateHz: math.NaN(), FullScaleV: 1}
	s.choice("kind", &v.Kind, "soundcard", "pipe", "demo")
	s.words("device", &v.Device)
	s.number("rate", &v.RateHz, wholeRate)
	s.missing("rate", "give frames per second")
	s.number("full_scale", &v.FullScaleV, positive)
	s.whole("channels", &v.Channels, 1, maxChannels)
	v.LimitV = v.FullScaleV
	s.number("limit", &v.LimitV, positive)
	s.done()
	return v
}

func readAnalysis(s *section) Analysis {
	v := Analysis{
		MaxFrequencyHz: math.NaN(), LineSpacingHz: math.NaN(),
		Window: "hann", Overlap: 0.5,
		Excitation: "random", Averaging: "linear", Estimator: "h1",
	}
	s.number("max_frequency", &v.MaxFrequencyHz, positive)
	s.missing("max_frequency", "give the top of the band of interest in Hz")
	s.number("min_frequency", &v.MinFrequencyHz, notBelow0)
	s.number("line_spacing", &v.LineSpacingHz, positive)
	s.choice("excitation", &v.Excitation, "random", "burst", "periodic")
	if v.Excitation != "" && v.Excitation != "periodic" {
		s.missing("line_spacing", "give the wanted spacing of spectral lines in Hz")
	}
	if v.bounded() {
		v.Window, v.Overlap = "rectangular", 0
	}
	s.choice("window", &v.Window, "hann", "rectangular", "flattop")
	s.number("overlap", &v.Overlap, belowOne)
	s.choice("averaging", &v.Averaging, "linear", "exponential")
	s.whole("memory", &v.Memory, 2, maxCount)
	s.choice("estimator", &v.Estimator, "h1", "h2", "hv")
	s.done()
	return v
}

// bounded says that a block holds a whole burst or period, so that no window is needed.
func (v Analysis) bounded() bool { return v.Excitation == "burst" || v.Excitation == "periodic" }

func readBurst(s *section) Burst {
	v := Burst{TriggerLevel: 0.1}
	s.number("period_s", &v.PeriodS, duration)
	s.name("trigger_force", &v.TriggerForce)
	s.number("trigger_level", &v.TriggerLevel, inside0to1)
	s.number("pre_trigger_s", &v.PreTriggerS, lead)
	s.done()
	return v
}

func readPeriodic(s *section) Periodic {
	v := Periodic{SettlePeriods: 8, KeepPeriods: 2}
	s.whole("period", &v.Period, 1, maxCount)
	s.whole("settle_periods", &v.SettlePeriods, 0, maxPeriods)
	s.whole("keep_periods", &v.KeepPeriods, 2, maxPeriods)
	s.done()
	return v
}

func readTarget(s *section) Target {
	v := Target{RandomError: 0.05, Share: 0.9, DepthDB: 20}
	s.number("random_error", &v.RandomError, positive)
	s.number("share", &v.Share, share)
	s.number("depth_db", &v.DepthDB, positive)
	s.done()
	return v
}

func readWatch(s *section) string {
	onFault := "hold"
	s.choice("on_fault", &onFault, "hold", "carry-on")
	s.done()
	return onFault
}

// readChannel reads one force or response, whose unit is one of units and by default the first.
func (f *file) readChannel(s *section, units ...string) Channel {
	c := Channel{Unit: units[0], Sensitivity: math.NaN(), FullScaleV: f.rig.Source.FullScaleV}
	s.name("name", &c.Name)
	if c.Name != "" {
		s.label = s.kind + " " + quote(c.Name)
	}
	s.whole("channel", &c.Index, 1, maxChannels)
	c.Line = s.lineOf("channel")
	c.Index-- // negative where it is absent or wrong
	s.name("point", &c.Point)
	s.choice("axis", &c.Axis, "+x", "-x", "+y", "-y", "+z", "-z")
	s.choice("unit", &c.Unit, units...)
	s.number("sensitivity", &c.Sensitivity, notZero)
	s.number("full_scale", &c.FullScaleV, positive)
	c.LimitV = f.defaultLimit(c.FullScaleV)
	s.number("limit", &c.LimitV, positive)
	s.missing("channel", "give the input channel, from 1")
	s.missing("name", "give one that no other channel has")
	s.missing("point", "give the point of the structure")
	s.missing("axis", "give the transducer's positive direction, as +z")
	s.missing("sensitivity", "give volts per unit")
	s.done()
	if scale := math.Abs(c.Scale()); scale < 1/maxScale || scale > maxScale {
		s.add("sensitivity", "digital full scale is %.3g N or m/s^2: correct sensitivity or full_scale", scale)
	}
	return c
}

// defaultLimit is where a channel clips that has no limit of its own: at its full scale, or at the
// source's limit where the file gives one that is lower. A source's limit above the source's full
// scale says that samples go beyond full scale, as floating-point ones may; then it stands.
func (f *file) defaultLimit(fullScaleV float64) float64 {
	source := f.rig.Source
	switch {
	case !f.source.has("limit"):
		return fullScaleV
	case source.LimitV > source.FullScaleV:
		return source.LimitV
	default:
		return math.Min(source.LimitV, fullScaleV)
	}
}

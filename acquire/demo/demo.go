// Package demo holds simulated rigs: a pump skid on soft cords and light structures drawn at
// random, electrodynamic shakers that push them through stingers, sensors with noise, and all that
// can break on these, so that everything behind the source can be tried without hardware.
//
// It knows mechanics and the channels of a rig file. It may not know spectra, verdicts or the time
// on the wall: frames come as fast as they are read.
package demo

import (
	"bytes"
	_ "embed"
	"fmt"

	"shakerwatch/acquire/rig"
)

//go:embed skid.toml
var skidFile []byte

// What the variants of the rig have in the place of its analysis and target.
var (
	//go:embed skid_burst_analysis.toml
	burstAnalysis []byte
	//go:embed skid_periodic_analysis.toml
	periodicAnalysis []byte
)

// Rig returns the demo's own rig: two shakers and 14 accelerometers on the skid, with random
// excitation. The caller owns it.
func Rig() *rig.Rig { return RigFor("random") }

// RigFor returns the demo's rig with settings that suit an excitation: random, burst or periodic. It
// panics on another. The caller owns the rig.
func RigFor(excitation string) *rig.Rig {
	path, text := RigFile(excitation)
	r, err := rig.Parse(path, text)
	if err != nil {
		panic(fmt.Sprintf("demo: the built-in rig file: %v", err))
	}
	return r
}

// RigFile returns the name and text of the rig file behind RigFor, to start from for an own one. It
// panics on an excitation other than random, burst and periodic. The caller owns the text.
func RigFile(excitation string) (name string, text []byte) {
	switch excitation {
	case "random":
		return "skid.toml", bytes.Clone(skidFile)
	case "burst":
		return "skid_burst.toml", withAnalysis(burstAnalysis)
	case "periodic":
		return "skid_periodic.toml", withAnalysis(periodicAnalysis)
	default:
		panic(fmt.Sprintf("demo: no rig for excitation %q", excitation))
	}
}

// withAnalysis returns the rig file with other settings between the source and the channels.
func withAnalysis(settings []byte) []byte {
	head, rest, ok := bytes.Cut(skidFile, []byte("[analysis]\n"))
	_, channels, found := bytes.Cut(rest, []byte("\n# Shaker S1"))
	if !ok || !found {
		panic("demo: the built-in rig file lacks [analysis] or its channels")
	}
	return bytes.Join([][]byte{head, settings, []byte("# Shaker S1"), channels}, nil)
}

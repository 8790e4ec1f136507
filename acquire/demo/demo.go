// Package demo holds a simulated rig: a pump skid on soft cords, electrodynamic shakers that push it
// through stingers, and sensors with noise, so that everything behind the source can be tried without hardware.
//
// It knows mechanics and the channels of a rig file. It may not know spectra, verdicts or the time
// on the wall: frames come as fast as they are read.
package demo

import (
	_ "embed"
	"fmt"

	"shakerwatch/acquire/rig"
)

//go:embed skid.toml
var skidFile []byte

// Rig returns the demo's own rig: two shakers and 14 accelerometers on the skid. The caller owns it.
func Rig() *rig.Rig {
	r, err := rig.Parse("skid.toml", skidFile)
	if err != nil {
		panic(fmt.Sprintf("demo: the built-in rig file: %v", err))
	}
	return r
}

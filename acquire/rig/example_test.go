package rig_test

import (
	"fmt"

	"shakerwatch/acquire/rig"
)

func ExampleParse() {
	_, err := rig.Parse("skid.toml", []byte(`[source]
rate = 0

[analysis]
max_frequency = 400
line_spacing = 0.25
window = "hanning"

[[force]]
channel = 1
name = "shaker A"
point = "112"
axis = "+z"
sensitivity = 0.0112
`))
	fmt.Println(err)
	// Output:
	// skid.toml:1: no response: add a table [[response]] for each
	// skid.toml:2: [source]: rate is 0: give whole frames per second, as a recording states them
	// skid.toml:7: [analysis]: window is "hanning": choose "hann", "rectangular" or "flattop"
}

func ExampleRig_CheckStream() {
	r, err := rig.Read("testdata/skid.toml")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(r.CheckStream("run.wav", 48000, 5))
	// Output:
	// testdata/skid.toml:42: response "suction end": channel 6 of 5 in run.wav: choose 1 to 5
}

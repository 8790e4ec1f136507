package demo_test

import (
	"fmt"

	"shakerwatch/acquire/demo"
)

// A stinger comes off after a second, and half a second later some frames are lost.
func ExampleSource_SetFaults() {
	r := demo.Rig()
	source, err := demo.New(r, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	var faults []demo.Fault
	for _, text := range []string{"detach@1s-30s:S2", "lost@1.5s=64"} {
		f, err := demo.ParseFault(text)
		if err != nil {
			fmt.Println(err)
			return
		}
		faults = append(faults, f)
	}
	if err := source.SetFaults(faults...); err != nil {
		fmt.Println(err)
		return
	}
	second := make([]float64, 2560*source.Channels())
	for range 3 {
		n, err := source.Read(second)
		fmt.Println(n, "frames,", err)
	}
	// Output:
	// 2560 frames, <nil>
	// 1280 frames, <nil>
	// 0 frames, 64 frames were lost
}

func ExampleParseFault() {
	_, err := demo.ParseFault("detach@60s-50s:S2")
	fmt.Println(err)
	// Output:
	// fault "detach@60s-50s:S2": end "50s" is not behind onset "60s": give a later end, or none
}

func ExampleNewRandomRig() {
	piece, err := demo.NewRandomRig(7, demo.RandomOptions{Shape: "plate", Drive: "voltage", Shakers: 3, Responses: 6})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(len(piece.Rig.Forces), "forces,", len(piece.Rig.Responses), "responses, up to", piece.Rig.Analysis.MaxFrequencyHz, "Hz")
	// Output:
	// 3 forces, 6 responses, up to 200 Hz
}

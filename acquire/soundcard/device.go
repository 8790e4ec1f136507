package soundcard

import (
	"fmt"
	"strings"
)

// A Device is a sound device as the system describes it.
type Device struct {
	HostAPI       string // the system's interface through which it is reached, such as "ALSA"
	Name          string
	Inputs        int // channels
	Outputs       int // channels
	DefaultRateHz float64
	Default       bool // the one to capture from when none is named

	// RatesHz are those of the usual rates at which it lets itself be captured from, rising. There
	// are none for a device without inputs, nor while another program keeps it for itself. With
	// all its channels a device may allow fewer: Open tells.
	RatesHz []float64
}

// usualRatesHz are the rates that are tried: those that sound cards commonly have, from memory.
var usualRatesHz = []float64{
	8000, 11025, 16000, 22050, 32000, 44100, 48000, 88200, 96000, 176400, 192000, 352800, 384000,
}

// String is the host API and the name, which together tell devices apart.
func (d Device) String() string { return d.HostAPI + ": " + d.Name }

// match is the index of the one device with inputs that is meant by text, as Open says. The error lists
// the choices.
func match(devices []Device, text string) (int, error) {
	fits := []func(Device) bool{
		func(d Device) bool { return text == "" && d.Default },
		func(d Device) bool { return strings.EqualFold(d.Name, text) },
		func(d Device) bool { return strings.EqualFold(d.String(), text) },
		func(d Device) bool {
			return text != "" && strings.Contains(strings.ToLower(d.String()), strings.ToLower(text))
		},
	}
	inputs := func(Device) bool { return true }
	if len(find(devices, inputs)) == 0 {
		return 0, fmt.Errorf("no device to capture from: sound devices: connect one, and see that the system has it")
	}
	for _, fit := range fits {
		found := find(devices, fit)
		if len(found) == 1 {
			return found[0], nil
		}
		if len(found) > 1 {
			return 0, fmt.Errorf("%d devices fit: sound device %q: choose %s", len(found), text, list(devices, found))
		}
	}
	what := "no such device"
	if text == "" {
		what = "no default device"
	}
	return 0, fmt.Errorf("%s: sound device %q: choose %s", what, text, list(devices, find(devices, inputs)))
}

// find gives the indices of the devices with inputs that fit.
func find(devices []Device, fit func(Device) bool) []int {
	var found []int
	for i, d := range devices {
		if d.Inputs > 0 && fit(d) {
			found = append(found, i)
		}
	}
	return found
}

func list(devices []Device, chosen []int) string {
	names := make([]string, len(chosen))
	for i, k := range chosen {
		names[i] = fmt.Sprintf("%q", devices[k].String())
	}
	return strings.Join(names, " or ")
}

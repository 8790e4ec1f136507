package soundcard

import (
	"strings"
	"testing"
)

var someDevices = []Device{
	{HostAPI: "ALSA", Name: "USB interface: Audio (hw:1,0)", Inputs: 8, Outputs: 8},
	{HostAPI: "ALSA", Name: "Loudspeaker", Outputs: 2},
	{HostAPI: "ALSA", Name: "pulse", Inputs: 32, Outputs: 32},
	{HostAPI: "ALSA", Name: "pulse (second)", Inputs: 32, Outputs: 32},
	{HostAPI: "ALSA", Name: "default", Inputs: 32, Outputs: 32, Default: true},
	{HostAPI: "JACK", Name: "system", Inputs: 2},
	{HostAPI: "OSS", Name: "system", Inputs: 2},
}

func TestMatch(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       int
	}{
		{"empty: the default", "", 4},
		{"a part, in another case", "usb INTER", 0},
		{"a name that is a part of another", "Pulse", 2},
		{"the name behind that of the host API", "jack: System", 5},
		{"a part that reaches over the colon", "oss: sys", 6},
		{"a part of the name of the host API", "jack", 5},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got, err := match(someDevices, c.text); err != nil || got != c.want {
				t.Errorf("got %d, %v, want %d", got, err, c.want)
			}
		})
	}
}

func TestMatchRefuses(t *testing.T) {
	silent := []Device{{HostAPI: "ALSA", Name: "Loudspeaker", Outputs: 2, Default: true}}
	for _, c := range []struct {
		name    string
		devices []Device
		text    string
		want    string
	}{
		{"nothing at all", nil, "", "no device to capture from: sound devices: connect one, and see that the system has it"},
		{"no inputs", silent, "Loudspeaker", "no device to capture from: sound devices: connect one, and see that the system has it"},
		{"unknown", someDevices[4:6], "bridge", `no such device: sound device "bridge": choose "ALSA: default" or "JACK: system"`},
		{"known, but without inputs", someDevices[:3], "loudsp", `no such device: sound device "loudsp": choose "ALSA: USB interface: Audio (hw:1,0)" or "ALSA: pulse"`},
		{"part of several", someDevices, "puls", `2 devices fit: sound device "puls": choose "ALSA: pulse" or "ALSA: pulse (second)"`},
		{"name of several", someDevices, "system", `2 devices fit: sound device "system": choose "JACK: system" or "OSS: system"`},
		{"no default", someDevices[5:], "", `no default device: sound device "": choose "JACK: system" or "OSS: system"`},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got, err := match(c.devices, c.text); err == nil || err.Error() != c.want {
				t.Errorf("got %d, %v, want %s", got, err, c.want)
			}
		})
	}
}

// What a message offers is what Match takes.
func TestMatchTakesWhatItOffers(t *testing.T) {
	for i, d := range someDevices {
		if d.Inputs == 0 {
			continue
		}
		for _, text := range []string{d.String(), strings.ToUpper(d.String())} {
			if got, err := match(someDevices, text); err != nil || got != i {
				t.Errorf("%s: %d, %v", text, got, err)
			}
		}
	}
}

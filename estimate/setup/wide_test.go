package setup

import (
	"fmt"
	"strings"
	"testing"

	"shakerwatch/acquire/rig"
)

// wideRig has two forces and responses up to the number of channels.
func wideRig(t testing.TB, channels int) *rig.Rig {
	var text strings.Builder
	text.WriteString("[source]\nkind = \"pipe\"\nrate = 48000\nfull_scale = 10.0\n[analysis]\nmax_frequency = 1000.0\nline_spacing = 1.0\n")
	for ch := range channels {
		table := "response"
		if ch < 2 {
			table = "force"
		}
		fmt.Fprintf(&text, "[[%s]]\nchannel = %d\nname = \"C%d\"\npoint = \"%d\"\naxis = \"+z\"\nsensitivity = 0.1\n", table, ch+1, ch+1, ch+1)
	}
	return parseRig(t, text.String())
}

func benchName(channels int) string { return fmt.Sprintf("%dchannels", channels) }

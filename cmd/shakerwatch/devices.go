package main

import (
	"context"
	"fmt"
	"strconv"
	"strings"
	"text/tabwriter"

	"shakerwatch/acquire/soundcard"
)

// devices lists the sound devices.
func (a *app) devices(context.Context, []string) error {
	devices, err := soundcard.Devices()
	if err != nil {
		return unusable(err)
	}
	if len(devices) == 0 {
		return unusablef("no sound device was found: plug one in, or look at the system's sound settings")
	}
	t := tabwriter.NewWriter(a.stdout, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "host API\tname\tinputs\toutputs\trates in Hz")
	for _, d := range devices {
		name := d.Name
		if d.Default {
			name += " (default input)"
		}
		fmt.Fprintf(t, "%s\t%s\t%d\t%d\t%s\n", d.HostAPI, name, d.Inputs, d.Outputs, rates(d.RatesHz))
	}
	return t.Flush()
}

func rates(ratesHz []float64) string {
	if len(ratesHz) == 0 {
		return "none to capture from"
	}
	var list []string
	for _, r := range ratesHz {
		list = append(list, strconv.FormatFloat(r, 'f', -1, 64))
	}
	return strings.Join(list, " ")
}

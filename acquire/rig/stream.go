package rig

import "strconv"

// CheckStream compares r with a stream that was found, and what names it in messages: a recording
// or a device of rateHz frames per second and channels in a frame. The rates have to be equal and
// every channel of r has to exist. The error is a Mistakes with the lines of the rig file, or nil.
func (r *Rig) CheckStream(what string, rateHz float64, channels int) error {
	rep := &report{path: r.Path}
	if rateHz != r.Source.RateHz {
		rep.add(r.rateLine, "[source]: rate %s, but %s has %s frames per second: make them equal",
			exact(r.Source.RateHz), what, exact(rateHz))
	}
	check := func(kind string, list []Channel) {
		for _, c := range list {
			if c.Index >= channels {
				rep.add(c.Line, "%s %s: channel %d of %d in %s: choose 1 to %d",
					kind, quote(c.Name), c.Index+1, channels, what, channels)
			}
		}
	}
	check("force", r.Forces)
	check("response", r.Responses)
	return rep.err()
}

// exact writes v with as many digits as tell it from every other number.
func exact(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

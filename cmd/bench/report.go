package main

import (
	"fmt"
	"io"
	"slices"
	"strings"
)

// quiet is the share of the machine that other programs may take before the report says so: own choice.
const quiet = 0.05

var names = [contestants]string{"shakerwatch", "NumPy", "C"}

// printHead says who takes part and what the figures are.
func printHead(w io.Writer, r *result) {
	for _, about := range r.about {
		fmt.Fprintln(w, about)
	}
	fmt.Fprintf(w, "C is built with %s and the sizes as constants\n", strings.Join(compilerFlags, " "))
	fmt.Fprintln(w, "millions of channel samples per second, each counted once although two blocks hold it; medians of the rounds, in brackets their range;")
	fmt.Fprintf(w, "per core: by processor time; times real time at %d kHz; peak memory with the recording\n", rateHz/1000)
}

// printResult prints one size.
func printResult(w io.Writer, r *result) {
	recorded := float64(floatBytes*r.size.frames(r.blocks)*r.size.channels()) / (1 << 20)
	fmt.Fprintf(w, "\n%v, %d lines; recording of %d blocks, %.0f MiB; %d rounds on %d cores; other programs took %.0f %% of the machine",
		r.size, r.size.lines(), r.blocks, recorded, r.rounds, r.cores, 100*r.others)
	if r.others > quiet {
		fmt.Fprint(w, ": it was not quiet, only the figures per core say much")
	}
	fmt.Fprintln(w)
	for i, name := range names {
		speeds := slices.Clone(r.speeds[i])
		speed := median(speeds)
		fmt.Fprintf(w, "  %-11s %7.1f M/s (%.1f to %.1f), %6.1f per core, %7.1f times real time, %5.0f MiB",
			name, speed/1e6, speeds[0]/1e6, speeds[len(speeds)-1]/1e6, r.perCore[i]/1e6,
			speed/float64(rateHz*r.size.channels()), r.peakMiB[i])
		if i != ours {
			fmt.Fprintf(w, "; %s; results apart by %.1e", r.ways[i], r.apart[i])
		}
		fmt.Fprintln(w)
	}
	for _, other := range []int{numpys, limits} {
		ratios := r.ratios(other)
		middle := median(ratios)
		fmt.Fprintf(w, "  shakerwatch over %-5s %5.2f (%.2f to %.2f), per core %.2f",
			names[other], middle, ratios[0], ratios[len(ratios)-1], r.perCore[ours]/r.perCore[other])
		if r.aimed() {
			aim := map[int]float64{numpys: aimNumPy, limits: aimLimit}[other]
			fmt.Fprintf(w, ", aim on %d cores at least %g: %s", aimCores, aim, verdict(middle >= aim))
		}
		fmt.Fprintln(w)
	}
	fmt.Fprintf(w, "  the three agree to %g: %s\n", tolerance, verdict(r.disagreement() == nil))
}

func verdict(pass bool) string {
	if pass {
		return "pass"
	}
	return "FAIL"
}

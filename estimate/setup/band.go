package setup

import (
	"fmt"
	"math"
)

// A band is a run of spectral lines.
type band struct {
	first, last int        // lines, both in it
	hz          [2]float64 // where these lie
}

func newBand(first, last int, spacingHz float64) band {
	return band{first, last, [2]float64{float64(first) * spacingHz, float64(last) * spacingHz}}
}

func (b band) String() string { return fmt.Sprintf("%.4g to %.4g Hz", b.hz[0], b.hz[1]) }

// minBandLines is how few lines a band may have: four Hann lines at eight half-overlapped averages are
// worth 18 independent values, which give a level to 1.0 dB.
const minBandLines = 4

// octaves cuts lines first to last into octave bands around 1000 Hz, base ten: with G = 10^(3/10),
// the band of number x has its middle at 1000 G^x Hz and its edges at 1000 G^(x±½) Hz (IEC
// 61260-1:2014, from memory). A band that has fewer than four lines, at either end or because the
// lines lie far apart, is joined to the next one above, the last one to the one below.
func octaves(first, last int, spacingHz float64) []band {
	var bands []band
	for k := max(first, 1); k <= last; {
		x := math.Floor(math.Log10(float64(k)*spacingHz/1000)/0.3 + 0.5)
		end := k
		// The edge is irrational, so no line of a spacing that can be written lies on it.
		for end < last && float64(end+1)*spacingHz < octaveEdge(x+1) {
			end++
		}
		if n := len(bands) - 1; n >= 0 && bands[n].last-bands[n].first+1 < minBandLines {
			bands[n] = newBand(bands[n].first, end, spacingHz)
		} else {
			bands = append(bands, newBand(k, end, spacingHz))
		}
		k = end + 1
	}
	if n := len(bands) - 1; n > 0 && bands[n].last-bands[n].first+1 < minBandLines {
		bands[n-1] = newBand(bands[n-1].first, bands[n].last, spacingHz)
		bands = bands[:n]
	}
	return bands
}

// octaveEdge is the lower edge of the octave of number x, in Hz.
func octaveEdge(x float64) float64 { return 1000 * math.Pow(10, 0.3*(x-0.5)) }

// runs are the bands of lines for which low tells true; gaps of fewer than smear lines, into which a
// window spreads what stands beside them, do not part them.
func (c *check) runs(low func(k int) bool) []band {
	var bands []band
	for k := c.first; k <= c.last; k++ {
		if !low(k) {
			continue
		}
		if n := len(bands) - 1; n >= 0 && k-bands[n].last <= c.window.Smear()+1 {
			bands[n] = c.band(bands[n].first, k)
		} else {
			bands = append(bands, c.band(k, k))
		}
	}
	return bands
}

// inHz are where bands lie.
func inHz(bands []band) [][2]float64 {
	list := make([][2]float64, 0, len(bands))
	for _, b := range bands {
		list = append(list, b.hz)
	}
	return list
}

// ofBands says in how many more bands than the one named something shows.
func ofBands(n int) string {
	if n < 2 {
		return ""
	}
	return fmt.Sprintf(", the worst of %d bands", n)
}

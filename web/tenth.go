package web

import "math"

// worstAndTenth are the smallest of the values that are known, where it stands, and their tenth percentile,
// the smallest that at least a tenth of them do not exceed; both are NaN when none is known. scratch has
// room for all values.
func worstAndTenth(values, scratch []float64) (worst float64, at int, tenth float64) {
	known := scratch[:0]
	worst = math.NaN()
	for i, v := range values {
		if v != v {
			continue
		}
		known = append(known, v)
		if !(v >= worst) {
			worst, at = v, i
		}
	}
	if len(known) == 0 {
		return worst, at, math.NaN()
	}
	return worst, at, smallest(known, (len(known)+9)/10-1)
}

// smallest is the value that would stand at index n if values were sorted. There is no NaN among
// them. It reorders values. Hoare's selection: Comm. ACM 4, 1961, algorithm 65.
func smallest(values []float64, n int) float64 {
	lo, hi := 0, len(values)-1
	for lo < hi {
		pivot := values[(lo+hi)/2]
		i, j := lo, hi
		for i <= j {
			for values[i] < pivot {
				i++
			}
			for values[j] > pivot {
				j--
			}
			if i <= j {
				values[i], values[j] = values[j], values[i]
				i++
				j--
			}
		}
		switch {
		case n <= j:
			hi = j
		case n >= i:
			lo = i
		default:
			return values[n]
		}
	}
	return values[n]
}

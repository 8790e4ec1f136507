package web

import "math"

// worstAndTenth are the smallest and the tenth percentile of the values that are known, the latter
// being the smallest that at least a tenth of them do not exceed; both are NaN when none is known. It
// reorders values.
func worstAndTenth(values []float64) (worst, tenth float64) {
	known := values[:0]
	worst = math.NaN()
	for _, v := range values {
		if math.IsNaN(v) {
			continue
		}
		known = append(known, v)
		if !(v >= worst) {
			worst = v
		}
	}
	if len(known) == 0 {
		return worst, math.NaN()
	}
	return worst, smallest(known, (len(known)+9)/10-1)
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

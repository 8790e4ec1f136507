package web

import (
	"math"

	"shakerwatch/estimate"
)

// historySize is how many points of the convergence are kept.
const historySize = 128

// A history is how the worst random error fell with the number of averages. Its memory does not
// grow: when it is full, the larger error of every two neighbours stays.
type history struct {
	points []historyPoint
}

type historyPoint struct {
	averages float64
	err      float64 // relative standard deviation
}

// add notes the error after a number of averages. An unknown one is not kept; fewer averages than
// before mean that the average was started over.
func (h *history) add(averages int, err float64) {
	n := float64(averages)
	if len(h.points) > 0 && n < h.points[len(h.points)-1].averages {
		h.points = h.points[:0]
	}
	if math.IsNaN(err) || averages == 0 {
		return
	}
	if last := len(h.points) - 1; last >= 0 && h.points[last].averages == n {
		h.points[last].err = err
		return
	}
	if len(h.points) == historySize {
		h.halve()
	}
	h.points = append(h.points, historyPoint{n, err})
}

func (h *history) halve() {
	kept := h.points[:0]
	for i := 0; i+1 < len(h.points); i += 2 {
		p := h.points[i]
		if h.points[i+1].err > p.err {
			p = h.points[i+1]
		}
		kept = append(kept, p)
	}
	h.points = kept
}

// projectionPoints is enough for a curve that is nearly straight on the plot's axes.
const projectionPoints = 24

// projection appends the points from the newest one to the predicted total of averages, along the
// law by which estimate.Progress predicts: the error's square falls with n_e - q. It is empty when
// the prediction is unknown or reached.
func (h *history) projection(dst []historyPoint, effective float64, q int, needed estimate.Number) []historyPoint {
	if len(h.points) == 0 {
		return dst
	}
	now := h.points[len(h.points)-1]
	ratio := float64(needed) / now.averages
	free := effective - float64(q)
	if !(ratio > 1) || math.IsInf(ratio, 1) || !(free > 0) {
		return dst
	}
	for i := range projectionPoints {
		grown := math.Pow(ratio, float64(i)/(projectionPoints-1))
		err := now.err * math.Sqrt(free/(grown*effective-float64(q)))
		dst = append(dst, historyPoint{now.averages * grown, err})
	}
	return dst
}

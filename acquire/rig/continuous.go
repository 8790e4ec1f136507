package rig

// Continuous is r for signals that are analysed as they come, whatever the excitation: plain averages of
// overlapping blocks on the same lines. Rigs with random excitation keep their window and overlap;
// for others it is Hann and one half.
func (r *Rig) Continuous() *Rig {
	c := *r
	c.Analysis.Averaging, c.Analysis.Memory, c.Analysis.Estimator = "linear", 0, "h1"
	if !r.Analysis.bounded() {
		return &c
	}
	c.Burst, c.Periodic = Burst{}, Periodic{}
	c.Analysis.Excitation, c.Analysis.Window, c.Analysis.Overlap = "random", "hann", 0.5
	c.Grid.Hop = max(1, (r.Grid.Block+1)/2)
	return &c
}

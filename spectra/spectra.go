// Package spectra turns frames into averaged cross-spectral matrices: windows, cutting frames into
// blocks, the Fourier transform, the running average and snapshots of it.
//
// It knows forces and responses only as two groups of channels. It may not know shakers, quality
// measures or verdicts.
//
// The letters of the formulas: x_i is force i of q, y_o is response o of p, X and Y their windowed
// transforms over one block, and
//
//	Gxx_ij = E[X_i X_j*],  Gyx_oi = E[Y_o X_i*],  Gyy_o = E[|Y_o|²]
//
// as one-sided densities, with the convention e^{+iωt}. Arrays lie line by line with the pair index
// fastest: Gxx (line, i, j), Gyx (line, o, i), Gyy (line, o).
package spectra

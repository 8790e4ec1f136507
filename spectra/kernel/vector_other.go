//go:build !amd64

package kernel

// fastest are the loops that this processor runs best.
var fastest = &plain

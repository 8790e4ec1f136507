//go:build soundcard && !linux

package soundcard

// quiet has nothing to do where the system's sound libraries do not write to standard error.
func quiet() {}

//go:build !soundcard

package soundcard

// Devices returns ErrNotBuilt.
func Devices() ([]Device, error) { return nil, ErrNotBuilt }

func openCard(string, float64, int) (card, string, error) { return nil, "", ErrNotBuilt }

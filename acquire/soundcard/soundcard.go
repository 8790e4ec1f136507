// Package soundcard holds the source that captures from a sound card, and the list of the cards
// there are. It uses PortAudio, a C library, and is therefore built only with the build tag
// soundcard; without it everything is there and says ErrNotBuilt.
//
// It knows devices, frames and lost frames. It may not know volts, nor which channel carries what.
//
// A measurement wants the hardware itself. A sound server in between may convert rates, mix
// channels and set levels without a word, and so may the system's own settings for the device.
package soundcard

import (
	"context"
	"errors"
)

// ErrNotBuilt is what everything returns in a program that was built without the tag soundcard.
var ErrNotBuilt = errors.New("sound cards are not built into this program: " +
	"install Debian's portaudio19-dev to build (libportaudio2 to run), " +
	"then go build -tags soundcard ./cmd/shakerwatch")

// ErrLost is in the error of a Read when a device that was open gives nothing any more: unplugged,
// switched off, or the sound server before it has ended or hangs.
var ErrLost = errors.New("sound device lost")

// Open starts to capture the first channels of a device at a rate. device is its name, or its name
// behind that of its host API as Device.String writes it, or a part of that which no other device
// with inputs has; case does not matter. Empty, it means the default. The error says what there is to
// choose from, of devices, channels or rates.
//
// Devices that were plugged in while another Source is open are found only when that is closed:
// PortAudio looks for devices when it is started.
func Open(device string, rateHz float64, channels int) (*Source, error) {
	return open(context.Background(), device, rateHz, channels)
}

func open(ctx context.Context, device string, rateHz float64, channels int) (*Source, error) {
	card, label, err := openCard(device, rateHz, channels)
	if err != nil {
		return nil, err
	}
	return newSource(ctx, card, label, rateHz, channels), nil
}

// A card is the stream of an open device. It serves one goroutine at a time.
type card interface {
	// available is how many frames read would not have to wait for, and whether the device says
	// that some were lost.
	available() (frames int, overflow bool, err error)

	// read fills dst, no longer than what is available, and tells whether the device says that some
	// were lost before the end of it.
	read(dst []float32) (overflow bool, err error)

	// release stops the device and gives it back.
	release() error
}

// readsPerSecond, at most: a hundredth of a second is little beside a block, and much beside the cost
// of a call into C.
const readsPerSecond = 100

//go:build soundcard

package soundcard

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"sync"
	"time"

	"github.com/gordonklaus/portaudio"
)

// library guards what PortAudio and its binding keep once for the whole program.
var library sync.Mutex

// latency is asked of the device: how much it can keep while the program is held up. Nobody listens,
// so it may be long; what is longer than a tenth of a second or two makes the dashboard jerky.
const latency = 250 * time.Millisecond

// Devices lists the sound devices, also those without inputs.
func Devices() ([]Device, error) {
	library.Lock()
	defer library.Unlock()
	if err := initialize(); err != nil {
		return nil, err
	}
	defer portaudio.Terminate()
	devices, infos, err := devices()
	if err != nil {
		return nil, err
	}
	for i := range devices {
		devices[i].RatesHz = rates(infos[i], 1)
	}
	return devices, nil
}

// initialize is followed by Terminate unless it returns an error. Only when it is the first that is
// open does it look for devices.
func initialize() error {
	quiet()
	if err := portaudio.Initialize(); err != nil {
		return fmt.Errorf("%w: sound system: see whether other programs can record", err)
	}
	skipNumbers()
	return nil
}

// skipNumbers makes the binding number its streams from 4096 on. It hands a stream's number to C as
// if it were a pointer, and Go ends a program in which it comes across a pointer to one of the
// first 4096 bytes; with the race detector it looks each time. A stream that does not open, here for
// want of a buffer, has had its number.
var skipNumbers = sync.OnceFunc(func() {
	for range 4096 {
		portaudio.OpenStream(portaudio.StreamParameters{})
	}
})

// devices gives the same in our words and in PortAudio's, rates left out.
func devices() ([]Device, []*portaudio.DeviceInfo, error) {
	infos, err := portaudio.Devices()
	if err != nil {
		return nil, nil, fmt.Errorf("no list of devices: sound system: %w: see whether other programs can record", err)
	}
	chosen, err := portaudio.DefaultInputDevice()
	if err != nil {
		chosen = nil // match says so where it matters
	}
	devices := make([]Device, len(infos))
	for i, info := range infos {
		devices[i] = Device{
			HostAPI: info.HostApi.Name, Name: info.Name,
			Inputs: info.MaxInputChannels, Outputs: info.MaxOutputChannels,
			DefaultRateHz: info.DefaultSampleRate, Default: info == chosen,
		}
	}
	return devices, infos, nil
}

// rates are those of the usual ones at which so many channels can be captured.
func rates(info *portaudio.DeviceInfo, channels int) []float64 {
	var accepted []float64
	for _, rateHz := range usualRatesHz {
		if channels <= info.MaxInputChannels && accepts(info, rateHz, channels) == nil {
			accepted = append(accepted, rateHz)
		}
	}
	return accepted
}

func accepts(info *portaudio.DeviceInfo, rateHz float64, channels int) error {
	return portaudio.IsFormatSupported(parameters(info, rateHz, channels), []float32{0})
}

func parameters(info *portaudio.DeviceInfo, rateHz float64, channels int) portaudio.StreamParameters {
	return portaudio.StreamParameters{
		Input:           portaudio.StreamDeviceParameters{Device: info, Channels: channels, Latency: latency},
		SampleRate:      rateHz,
		FramesPerBuffer: portaudio.FramesPerBufferUnspecified,
		Flags:           portaudio.ClipOff | portaudio.DitherOff,
	}
}

// openCard opens and starts a device and says which it was.
func openCard(text string, rateHz float64, channels int) (card, string, error) {
	library.Lock()
	defer library.Unlock()
	if err := initialize(); err != nil {
		return nil, "", err
	}
	c, label, err := start(text, rateHz, channels)
	if err != nil {
		portaudio.Terminate()
		return nil, "", err
	}
	return c, label, nil
}

func start(text string, rateHz float64, channels int) (card, string, error) {
	devices, infos, err := devices()
	if err != nil {
		return nil, "", err
	}
	i, err := match(devices, text)
	if err != nil {
		return nil, "", err
	}
	label := devices[i].String()
	if channels < 1 || channels > devices[i].Inputs {
		return nil, "", fmt.Errorf("%d channels of %d: sound device %q: choose 1 to %[2]d", channels, devices[i].Inputs, label)
	}
	if !(rateHz > 0) { // PortAudio takes what is no number for a rate
		return nil, "", refused(portaudio.InvalidSampleRate, infos[i], label, rateHz, channels)
	}
	if err := accepts(infos[i], rateHz, channels); err != nil {
		return nil, "", refused(err, infos[i], label, rateHz, channels)
	}
	c := &stream{buffer: make([]float32, channels)}
	c.pa, err = portaudio.OpenStream(parameters(infos[i], rateHz, channels), &c.buffer)
	if err != nil {
		return nil, "", refused(err, infos[i], label, rateHz, channels)
	}
	if actual := c.pa.Info().SampleRate; math.Abs(actual/rateHz-1) > drift {
		c.pa.Close()
		return nil, "", fmt.Errorf("%v frames/s wanted, %v given: sound device %q: choose a rate that it has", rateHz, actual, label)
	}
	if err := c.pa.Start(); err != nil {
		c.pa.Close()
		return nil, "", refused(err, infos[i], label, rateHz, channels)
	}
	return c, label, nil
}

// refused says what to do about a device that does not open.
func refused(err error, info *portaudio.DeviceInfo, label string, rateHz float64, channels int) error {
	what := fmt.Errorf("%d channels at %v frames/s: sound device %q: %w", channels, rateHz, label, err)
	if errors.Is(err, portaudio.InvalidSampleRate) {
		if accepted := rates(info, channels); len(accepted) > 0 {
			return fmt.Errorf("%w: choose %s", what, strings.ReplaceAll(strings.Trim(fmt.Sprint(accepted), "[]"), " ", ", "))
		}
	}
	return fmt.Errorf("%w: see whether another program holds it, or choose another device or rate", what)
}

// A stream is read into one buffer of interleaved samples: into one for each channel, the binding
// would allocate at each read; its callback goes through reflection and ends the program on a panic.
type stream struct {
	pa     *portaudio.Stream
	buffer []float32
}

func (s *stream) available() (frames int, overflow bool, err error) {
	frames, err = s.pa.AvailableToRead()
	overflow, err = overflowed(err)
	return frames, overflow, err
}

func (s *stream) read(dst []float32) (overflow bool, err error) {
	s.buffer = dst // which the binding looks up at each read
	return overflowed(s.pa.Read())
}

func (s *stream) release() error {
	// Not Stop, which may wait for what is no longer to be had. Whatever hangs does so here most
	// likely, where it does not keep the library; and that a device is gone is no news here.
	s.pa.Abort()
	library.Lock()
	defer library.Unlock()
	return errors.Join(s.pa.Close(), portaudio.Terminate())
}

// overflowed tells the one error that is none: what was read with it is valid.
func overflowed(err error) (bool, error) {
	switch err {
	case nil:
		return false, nil
	case portaudio.InputOverflowed:
		return true, nil
	}
	return false, worded(err)
}

// worded gives words to an error of the system that has none, as it may be when a sound server has
// ended.
func worded(err error) error {
	var host portaudio.UnanticipatedHostError
	if errors.As(err, &host) && host.Text == "" {
		return errors.New("it is gone")
	}
	return err
}

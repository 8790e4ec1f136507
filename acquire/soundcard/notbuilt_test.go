//go:build !soundcard

package soundcard

import (
	"context"
	"errors"
	"strings"
	"testing"
)

func TestNotBuiltSaysHowToGetIt(t *testing.T) {
	devices, listed := Devices()
	source, opened := Open("", 48000, 2)
	reopening, again := OpenReopening(context.Background(), "", 48000, 2, nil)
	if devices != nil || source != nil || reopening != nil {
		t.Errorf("got %v, %v, %v", devices, source, reopening)
	}
	for _, err := range []error{listed, opened, again} {
		if !errors.Is(err, ErrNotBuilt) {
			t.Errorf("%v", err)
		}
	}
	for _, part := range []string{"portaudio19-dev", "libportaudio2", "go build -tags soundcard ./cmd/shakerwatch"} {
		if !strings.Contains(ErrNotBuilt.Error(), part) {
			t.Errorf("%v: it says nothing of %s", ErrNotBuilt, part)
		}
	}
}

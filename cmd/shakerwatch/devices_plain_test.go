//go:build !soundcard

package main

import (
	"strings"
	"testing"
)

func TestDevicesWithoutSoundCards(t *testing.T) {
	status, _, stderr := shakerwatch(t, "devices")
	if status != exitUnusable || !strings.Contains(stderr, "portaudio19-dev") || !strings.Contains(stderr, "-tags soundcard") {
		t.Errorf("exit status %d, %q: want 2 and how to get it", status, stderr)
	}
}

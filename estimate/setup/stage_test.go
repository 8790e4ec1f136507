package setup

import (
	"strings"
	"testing"
)

// TestInstructions wants the usual cautions in what a person is told before anything can move.
func TestInstructions(t *testing.T) {
	for _, test := range []struct {
		stage Stage
		code  string
		words []string
	}{
		{Muted, "muted", []string{"Mute every amplifier", "Keep clear", "qualified people decide"}},
		{Idle, "idle", []string{"drive to zero", "lowest gain", "Keep clear", "emergency stop in reach", "qualified people decide"}},
		{Low, "low", []string{"lowest level", "Keep clear", "emergency stop in reach", "switches nothing off", "qualified people decide"}},
	} {
		if got := test.stage.String(); got != test.code {
			t.Errorf("stage %d is called %q, want %q", int(test.stage), got, test.code)
		}
		for _, words := range test.words {
			if !strings.Contains(test.stage.Instruction(), words) {
				t.Errorf("%v: %q does not say %q", test.stage, test.stage.Instruction(), words)
			}
		}
	}
	if got := Stage(7).String(); got != "stage 7" {
		t.Errorf("%q", got)
	}
	for i, s := range Stages() {
		if int(s) != i || s.Name() == "" {
			t.Errorf("stage %d of the list is %v, %q", i, s, s.Name())
		}
	}
}

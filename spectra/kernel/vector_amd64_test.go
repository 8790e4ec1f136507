package kernel

import "testing"

func TestProcessorsWithoutTheInstructionsGetPlainLoops(t *testing.T) {
	if choose(false) != &plain || choose(true) != &vector {
		t.Error("the wrong loops")
	}
}

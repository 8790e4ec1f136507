package main

import (
	"strings"
	"testing"
)

func TestMissingToolsAreNamed(t *testing.T) {
	t.Setenv("PATH", t.TempDir())
	err := lookForTools(t.Context(), "no-python")
	if err == nil {
		t.Fatal("nothing is missing")
	}
	for _, name := range []string{"gcc", "libfftw3-dev", "python3-numpy"} {
		if !strings.Contains(err.Error(), name) {
			t.Errorf("%v: it does not name %s", err, name)
		}
	}
}

package main

import (
	"io"
	"strings"
	"testing"
)

func TestProgramRefuses(t *testing.T) {
	for _, args := range [][]string{nil, {"a", "b", "c", "d", "e", "f"}, {"no-such-file", "1", "1", "64", "1", "1"}} {
		if err := program(args, strings.NewReader(""), io.Discard); err == nil {
			t.Errorf("%q is taken", args)
		}
	}
}

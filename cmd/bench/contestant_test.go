package main

import (
	"strings"
	"testing"
)

func TestAFailedContestantSaysWhy(t *testing.T) {
	_, err := start(t.Context(), nil, "sh", "-c", "echo it broke >&2; exit 3")
	if err == nil || !strings.Contains(err.Error(), "it broke") || !strings.Contains(err.Error(), "exit status 3") {
		t.Errorf("error %v", err)
	}
}

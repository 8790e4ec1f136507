package main

import (
	"bytes"
	"os"
	"testing"
)

func TestFileIsUpToDate(t *testing.T) {
	got, err := os.ReadFile("../../vector_amd64.s")
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, source()) {
		t.Error("vector_amd64.s is not what the generator writes: run go generate ./spectra/kernel")
	}
}

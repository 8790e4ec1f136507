package main

import (
	"bytes"
	"context"
	_ "embed"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
)

//go:embed limit.c
var limitSource []byte

//go:embed with_numpy.py
var numpySource []byte

// compilerFlags are those of the program in C, besides its sizes.
var compilerFlags = []string{"-O3", "-march=native", "-fopenmp"}

// lookForTools says what is to be installed where something is missing.
func lookForTools(ctx context.Context, python string) error {
	var missing []string
	look := func(stdin, packages string, argv ...string) {
		cmd := exec.CommandContext(ctx, argv[0], argv[1:]...)
		cmd.Stdin = strings.NewReader(stdin)
		if cmd.Run() != nil {
			missing = append(missing, packages)
		}
	}
	look("#include <math.h>\n", "gcc libc6-dev", "gcc", "-E", "-xc", "-")
	look("#include <fftw3.h>\n", "libfftw3-dev", "gcc", "-E", "-xc", "-")
	look("", "python3-numpy", python, "-c", "import numpy")
	if len(missing) > 0 {
		return fmt.Errorf("what it compares with is missing: install Debian's %s", strings.Join(missing, " "))
	}
	return nil
}

// buildLimit builds the program in C for a size and for transforms of so many channels side by
// side, and returns its path.
func buildLimit(ctx context.Context, dir string, s size, group int) (string, error) {
	source, path := filepath.Join(dir, "limit.c"), filepath.Join(dir, fmt.Sprintf("limit-%d", group))
	if err := os.WriteFile(source, limitSource, 0o600); err != nil {
		return "", err
	}
	args := append([]string(nil), compilerFlags...)
	for _, constant := range []struct {
		name  string
		value int
	}{
		{"FORCES", s.Forces}, {"RESPONSES", s.Responses}, {"BLOCK", s.Block},
		{"LINES", s.lines()}, {"CHANNELS", s.channels()}, {"GROUP", group},
	} {
		args = append(args, fmt.Sprintf("-D%s=%d", constant.name, constant.value))
	}
	cmd := exec.CommandContext(ctx, "gcc", append(args, "-o", path, source, "-lfftw3", "-lm")...)
	if out, err := cmd.CombinedOutput(); err != nil {
		return "", fmt.Errorf("gcc: %w\n%s", err, bytes.TrimSpace(out))
	}
	return path, nil
}

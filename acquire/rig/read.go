package rig

import (
	"fmt"
	"io"
	"os"
)

// maxFileBytes bounds what is read: a rig of a thousand channels takes about 200 kB, and a
// recording given by mistake in place of a rig file is not read to its end.
const maxFileBytes = 1 << 20

// Read reads the rig file at path. The error is a Mistakes unless the file could not be read.
func Read(path string) (*Rig, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("read rig file: %w: check the path", err)
	}
	defer f.Close()
	text, err := io.ReadAll(io.LimitReader(f, maxFileBytes+1))
	if err != nil {
		return nil, fmt.Errorf("read rig file: %w: give a TOML file", err)
	}
	return Parse(path, text)
}

// Parse reads text, the content of the rig file at path, and resolves it. The error is a Mistakes
// with everything that is wrong, except that nothing behind a TOML syntax error is looked at.
// Parse keeps no hold of text.
func Parse(path string, text []byte) (*Rig, error) {
	rep := &report{path: path}
	if len(text) > maxFileBytes {
		rep.add(1, "the file is larger than %d bytes: give a rig file", maxFileBytes)
		return nil, rep.err()
	}
	r := build(parseTree(text, rep), rep)
	if err := rep.err(); err != nil {
		return nil, err
	}
	return r, nil
}

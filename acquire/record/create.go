package record

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"shakerwatch/acquire/wav"
)

// create makes the file. One that exists is moved aside until the new one is there.
func create(path string, o Options) (*wav.Writer, error) {
	if !o.Replace {
		return wav.Create(path, o.RateHz, o.Channels, o.Encoding)
	}
	target, err := filepath.EvalSymlinks(path)
	if errors.Is(err, fs.ErrNotExist) {
		return wav.Create(path, o.RateHz, o.Channels, o.Encoding)
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w: check the folder and its permissions", path, cause(err))
	}
	aside, err := moveAside(target)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	w, err := wav.Create(target, o.RateHz, o.Channels, o.Encoding)
	if err == nil {
		if err = os.Remove(aside); err == nil {
			return w, nil
		}
		w.Close()
		err = fmt.Errorf("%s: remove the old file: %w: check the permissions", path, cause(err))
	}
	if back := os.Rename(aside, target); back != nil {
		return nil, fmt.Errorf("%w; the old file is now %s: %w", err, aside, cause(back))
	}
	return nil, err
}

// moveAside gives a file another name in its folder and returns that. Only a regular file is moved:
// to replace a device or a folder can only be a mistake.
func moveAside(path string) (string, error) {
	info, err := os.Stat(path)
	switch {
	case err != nil:
		return "", fmt.Errorf("%w: check the permissions", cause(err))
	case info.IsDir():
		return "", errors.New("is a folder: give the name of a file")
	case !info.Mode().IsRegular():
		return "", errors.New("is no regular file: give the name of one")
	}
	f, err := os.CreateTemp(filepath.Dir(path), filepath.Base(path)+".*.old")
	if err != nil {
		return "", fmt.Errorf("%w: check the folder and its permissions", cause(err))
	}
	f.Close()
	if err := os.Rename(path, f.Name()); err != nil {
		os.Remove(f.Name())
		return "", fmt.Errorf("%w: check the permissions", cause(err))
	}
	return f.Name(), nil
}

// cause is err without the operation and the path, which our own errors begin with.
func cause(err error) error {
	if e, ok := errors.AsType[*fs.PathError](err); ok {
		return e.Err
	}
	if e, ok := errors.AsType[*os.LinkError](err); ok {
		return e.Err
	}
	return err
}

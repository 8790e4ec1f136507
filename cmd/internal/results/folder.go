package results

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
)

// A Folder is where results go.
type Folder struct {
	dir     string
	made    []string // folders that did not exist before, outermost first
	written bool
}

// Open makes sure that results can be written to dir later, making it where it does not exist. A
// folder that already holds one of the named files is refused and left untouched.
func Open(dir string, names ...string) (*Folder, error) {
	f := &Folder{dir: dir}
	for _, name := range names {
		if _, err := os.Lstat(f.path(name)); err == nil {
			return nil, fmt.Errorf("%s: it already holds results (%s): choose another folder, or add --replace", dir, name)
		}
	}
	if err := f.makeDir(); err != nil {
		f.Discard()
		return nil, fmt.Errorf("%s: %w: choose a folder that can be made and written to", dir, cause(err))
	}
	// Better to find out now than when the shakers have run for an hour.
	probe, err := os.CreateTemp(dir, ".probe-*.partial")
	if err != nil {
		f.Discard()
		return nil, fmt.Errorf("%s: %w: choose a folder that can be written to", dir, cause(err))
	}
	probe.Close()
	os.Remove(probe.Name())
	return f, nil
}

// cause is an error without the operation and path, which the caller says better.
func cause(err error) error {
	var path *os.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	return err
}

func (f *Folder) path(name string) string { return filepath.Join(f.dir, name) }

// makeDir makes the folder and what is missing above it, and remembers which.
func (f *Folder) makeDir() error {
	var missing []string
	for dir := filepath.Clean(f.dir); ; dir = filepath.Dir(dir) {
		_, err := os.Stat(dir)
		if err == nil || !errors.Is(err, os.ErrNotExist) || dir == filepath.Dir(dir) {
			break
		}
		missing = append(missing, dir)
	}
	for i := len(missing) - 1; i >= 0; i-- {
		if err := os.Mkdir(missing[i], 0o777); err != nil {
			return err
		}
		f.made = append(f.made, missing[i])
	}
	info, err := os.Stat(f.dir)
	if err == nil && !info.IsDir() {
		err = errors.New("it is a file")
	}
	return err
}

// Discard takes away the folders that Open made, if nothing was written to them.
func (f *Folder) Discard() {
	if f == nil || f.written {
		return
	}
	for i := len(f.made) - 1; i >= 0; i-- {
		os.Remove(f.made[i]) // a folder that is not empty stays
	}
}

// put writes a file under a name that nobody reads, makes sure that it is on the disk, and gives it
// its name in one step.
func (f *Folder) put(name string, write func(io.Writer) error) (err error) {
	file, err := os.CreateTemp(f.dir, "."+name+"-*.partial")
	if err != nil {
		return cause(err)
	}
	defer func() {
		if err != nil {
			file.Close()
			os.Remove(file.Name())
		}
	}()
	buffered := bufio.NewWriterSize(file, 1<<20)
	if err := write(buffered); err != nil {
		return cause(err)
	}
	if err := buffered.Flush(); err != nil {
		return cause(err)
	}
	if err := file.Chmod(0o644); err != nil {
		return cause(err)
	}
	if err := file.Sync(); err != nil {
		return cause(err)
	}
	if err := file.Close(); err != nil {
		return cause(err)
	}
	return os.Rename(file.Name(), f.path(name))
}

package record

import (
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"shakerwatch/acquire/wav"
)

// folder has a file, a folder, a link to the file and a link to nothing.
func folder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for _, err := range []error{
		os.WriteFile(filepath.Join(dir, "taken.wav"), []byte("precious"), 0o600),
		os.Mkdir(filepath.Join(dir, "inside"), 0o700),
		os.Symlink(filepath.Join("..", filepath.Base(dir), "taken.wav"), filepath.Join(dir, "link.wav")),
		os.Symlink("nowhere.wav", filepath.Join(dir, "dangling.wav")),
	} {
		if err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

const lookAround = ": check the folder and its permissions"

func TestCreateRefuses(t *testing.T) {
	for _, c := range []struct {
		name    string
		file    string
		replace bool
		rateHz  float64
		want    string
	}{
		{"file that exists", "taken.wav", false, 1000, "file exists: choose another name, or move it away"},
		{"folder", "inside", false, 1000, "file exists: choose another name, or move it away"},
		{"link", "link.wav", false, 1000, "file exists: choose another name, or move it away"},
		{"no such folder", "none/run.wav", false, 1000, "no such file or directory" + lookAround},
		{"a file for a folder", "taken.wav/run.wav", false, 1000, "not a directory" + lookAround},
		{"rate with a fraction", "run.wav", false, 44100.5, "rate of 44100.5 frames/s: a WAV header holds whole numbers from 1 on, choose one"},
		{"rate NaN", "run.wav", false, math.NaN(), "rate of NaN frames/s: a WAV header holds whole numbers from 1 on, choose one"},
		{"replace a folder", "inside", true, 1000, "is a folder: give the name of a file"},
		{"replace a link to nothing", "dangling.wav", true, 1000, "file exists: choose another name, or move it away"},
		{"replace in no folder", "none/run.wav", true, 1000, "no such file or directory" + lookAround},
		{"replace in a file", "taken.wav/run.wav", true, 1000, "not a directory" + lookAround},
		{"replace with a bad rate", "taken.wav", true, 0.5, "rate of 0.5 frames/s: a WAV header holds whole numbers from 1 on, choose one"},
	} {
		t.Run(c.name, func(t *testing.T) {
			dir := folder(t)
			path := filepath.Join(dir, c.file)
			r, err := Create(path, Options{RateHz: c.rateHz, Channels: 2, Encoding: wav.Float32, Replace: c.replace})
			if err == nil {
				r.Close()
				t.Fatal("no error")
			}
			if err.Error() != path+": "+c.want {
				t.Errorf("error is\n%v\nwant\n%s: %s", err, path, c.want)
			}
			if text, err := os.ReadFile(filepath.Join(dir, "taken.wav")); err != nil || string(text) != "precious" {
				t.Errorf("the file that existed holds %q, %v", text, err)
			}
			onlyThese(t, dir, "dangling.wav", "inside", "link.wav", "taken.wav")
		})
	}
}

func onlyThese(t *testing.T, dir string, want ...string) {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	if strings.Join(names, " ") != strings.Join(want, " ") {
		t.Errorf("the folder holds %q, want %q", names, want)
	}
}

// What is replaced is the file, also when a link leads to it, and nothing else.
func TestReplace(t *testing.T) {
	for _, name := range []string{"taken.wav", "link.wav", "new.wav"} {
		t.Run(name, func(t *testing.T) {
			dir := folder(t)
			o := options(1, wav.Float32)
			o.Replace = true
			r := mustCreate(t, filepath.Join(dir, name), o)
			r.queue.add(counting(1, 0, 10))
			if err := r.Close(); err != nil {
				t.Fatal(err)
			}
			equal(t, everything(t, open(t, filepath.Join(dir, name))), counting(1, 0, 10))
			if info, err := os.Lstat(filepath.Join(dir, "link.wav")); err != nil || info.Mode()&fs.ModeSymlink == 0 {
				t.Errorf("the link is now %v, %v", info, err)
			}
			there := []string{"dangling.wav", "inside", "link.wav", "taken.wav"}
			if name == "new.wav" {
				there = []string{"dangling.wav", "inside", "link.wav", "new.wav", "taken.wav"}
			}
			onlyThese(t, dir, there...)
		})
	}
}

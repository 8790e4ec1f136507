package results

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// names lists what is in a folder.
func names(t *testing.T, dir string) string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var list []string
	for _, e := range entries {
		list = append(list, e.Name())
	}
	return strings.Join(list, " ")
}

func TestFolderIsMadeAndTakenAway(t *testing.T) {
	base := t.TempDir()
	f, err := Open(filepath.Join(base, "a", "b"))
	if err != nil {
		t.Fatal(err)
	}
	if got := names(t, filepath.Join(base, "a")); got != "b" {
		t.Errorf("made %q", got)
	}
	f.Discard()
	if got := names(t, base); got != "" {
		t.Errorf("%q is left behind", got)
	}
}

func TestFolderThatWasThereStays(t *testing.T) {
	dir := t.TempDir()
	f, err := Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	f.Discard()
	if got := names(t, dir); got != "" {
		t.Errorf("%q is left behind", got)
	}
}

func TestFolderWithResultsIsRefused(t *testing.T) {
	for _, name := range []string{EstimatesFile, SummaryFile, EventsFile} {
		dir := t.TempDir()
		if err := os.WriteFile(filepath.Join(dir, name), []byte("old"), 0o644); err != nil {
			t.Fatal(err)
		}
		if _, err := Open(dir, EventsFile, name); err == nil || !strings.Contains(err.Error(), "already holds results") {
			t.Errorf("%s: error %v", name, err)
		}
		if text, _ := os.ReadFile(filepath.Join(dir, name)); string(text) != "old" {
			t.Errorf("%s was touched", name)
		}
		if _, err := Open(dir, "other"); err != nil {
			t.Errorf("%s: where it does not matter: %v", name, err)
		}
	}
}

func TestFolderThatCannotBe(t *testing.T) {
	file := filepath.Join(t.TempDir(), "file")
	if err := os.WriteFile(file, nil, 0o644); err != nil {
		t.Fatal(err)
	}
	for _, dir := range []string{file, filepath.Join(file, "below")} {
		if _, err := Open(dir); err == nil || strings.Contains(err.Error(), "\n") {
			t.Errorf("%s: error %v, want one line", dir, err)
		}
	}
}

func TestHalfAFileIsNeverSeen(t *testing.T) {
	dir := t.TempDir()
	f, err := Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := f.put("x", func(w io.Writer) error { _, err := io.WriteString(w, "old"); return err }); err != nil {
		t.Fatal(err)
	}
	broken := errors.New("disk full")
	err = f.put("x", func(w io.Writer) error {
		io.WriteString(w, strings.Repeat("new", 1<<20))
		if text, _ := os.ReadFile(filepath.Join(dir, "x")); string(text) != "old" {
			t.Errorf("while it is written, a reader sees %d bytes", len(text))
		}
		return broken
	})
	if !errors.Is(err, broken) {
		t.Errorf("error %v", err)
	}
	if text, _ := os.ReadFile(filepath.Join(dir, "x")); string(text) != "old" {
		t.Error("a broken write replaced the file")
	}
	if got := names(t, dir); got != "x" {
		t.Errorf("%q is in the folder, want x alone", got)
	}
}

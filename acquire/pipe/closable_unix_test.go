//go:build unix

package pipe_test

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"syscall"
	"testing"

	"shakerwatch/acquire/pipe"
)

// childTask names what this test program does as a child whose standard input is the matter.
const childTask = "SHAKERWATCH_PIPE_CHILD"

func TestMain(m *testing.M) {
	if os.Getenv(childTask) != "" {
		readStdinAndClose()
		return
	}
	os.Exit(m.Run())
}

// readStdinAndClose reads a frame, closes standard input while it waits for another, and says how
// the source ended.
func readStdinAndClose() {
	r, err := pipe.Closable(os.Stdin)
	if err != nil {
		fmt.Println(err)
		return
	}
	s := pipe.New(r, 100, 1, pipe.S16)
	dst := make([]float64, 1)
	n, err := s.Read(dst)
	fmt.Println(n, err, dst[0])
	go r.Close() // before or while Read waits: both must end it
	n, err = s.Read(dst)
	fmt.Println(n, err)
}

// A child's standard input blocks, as a shell's pipe does; a file in this process would not.
func TestClosableEndsReadOfStandardInput(t *testing.T) {
	child := exec.CommandContext(t.Context(), os.Args[0])
	child.Env = append(os.Environ(), childTask+"=1")
	stdin, stdinWriter, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	defer stdinWriter.Close() // only at the end, so that the child's Read has nothing to end it
	var out bytes.Buffer
	child.Stdin, child.Stdout, child.Stderr = stdin, &out, &out
	if err := child.Start(); err != nil {
		t.Fatal(err)
	}
	stdin.Close()
	if _, err := stdinWriter.Write([]byte{0, 0x40}); err != nil {
		t.Fatal(err)
	}
	if err := child.Wait(); err != nil {
		t.Error(err)
	}
	if want := "1 <nil> 0.5\n0 EOF\n"; out.String() != want {
		t.Errorf("the child says\n%s\nwant\n%s", out.String(), want)
	}
}

func TestClosableLeavesFilesAlone(t *testing.T) {
	path := filepath.Join(t.TempDir(), "frames.raw")
	if err := os.WriteFile(path, []byte{0, 0x40, 0, 0xc0}, 0o600); err != nil {
		t.Fatal(err)
	}
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	got, err := pipe.Closable(f)
	if got != f || err != nil {
		t.Fatalf("Closable = %v, %v; want the file itself", got, err)
	}
	if samples, err := frames(t, pipe.New(got, 100, 1, pipe.S16)); len(samples) != 2 || err != io.EOF {
		t.Errorf("read %v, %v", samples, err)
	}
}

func TestClosableOfAClosedFile(t *testing.T) {
	r, w, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	w.Close()
	r.Close()
	if f, err := pipe.Closable(r); err == nil {
		t.Errorf("Closable = %v without an error", f)
	}
}

// Nothing of ours keeps the pipe open: its writer learns that nobody reads any more.
func TestClosableTakesOver(t *testing.T) {
	r, w, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	defer w.Close()
	f, err := pipe.Closable(r)
	if err != nil || f == r {
		t.Fatalf("Closable = %v, %v; want another file", f, err)
	}
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
	if _, err := w.Write([]byte{1}); !errors.Is(err, syscall.EPIPE) {
		t.Errorf("writing into it says %v, want %v", err, syscall.EPIPE)
	}
}

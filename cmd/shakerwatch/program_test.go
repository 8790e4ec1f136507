package main

import (
	"bufio"
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"
)

// builtProgram builds the program as users build it, once for all tests.
var builtProgram = sync.OnceValues(func() (string, error) {
	dir, err := os.MkdirTemp("", "shakerwatch-test-")
	if err != nil {
		return "", err
	}
	path := filepath.Join(dir, "shakerwatch")
	if out, err := exec.Command("go", "build", "-o", path, ".").CombinedOutput(); err != nil {
		return "", fmt.Errorf("go build: %w\n%s", err, out)
	}
	return path, nil
})

func TestMain(m *testing.M) {
	status := m.Run()
	if path, err := builtProgram(); err == nil {
		os.RemoveAll(filepath.Dir(path))
	}
	os.Exit(status)
}

// A program is a running shakerwatch with its dashboard.
type program struct {
	t       *testing.T
	cmd     *exec.Cmd
	address string // of the dashboard
	stdout  *bufio.Reader
	stderr  bytes.Buffer
}

// start starts the program with a dashboard on a port of its own. It ends with the test at the
// latest.
func start(t *testing.T, args ...string) *program {
	t.Helper()
	path, err := builtProgram()
	if err != nil {
		t.Fatal(err)
	}
	p := &program{t: t, cmd: exec.Command(path, append(args, "--listen", "127.0.0.1:0")...)}
	p.cmd.Stderr = &p.stderr
	stdout, err := p.cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	p.stdout = bufio.NewReader(stdout)
	if err := p.cmd.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { p.cmd.Process.Kill() }) // does nothing when the program has ended
	p.address = strings.TrimPrefix(p.line("dashboard: "), "dashboard: ")
	return p
}

// line reads standard output up to a line that holds text.
func (p *program) line(text string) string {
	p.t.Helper()
	for {
		line, err := p.stdout.ReadString('\n')
		if strings.Contains(line, text) {
			return strings.TrimSpace(line)
		}
		if err != nil {
			p.t.Fatalf("no line with %q: %v; standard error: %s", text, err, p.stderr.String())
		}
	}
}

// interrupt presses Ctrl-C and waits for the end, which must be a clean one.
func (p *program) interrupt() {
	p.t.Helper()
	if err := p.cmd.Process.Signal(syscall.SIGINT); err != nil {
		p.t.Fatal(err)
	}
	ended := make(chan error, 1)
	go func() { ended <- p.cmd.Wait() }()
	select {
	case err := <-ended:
		if err != nil {
			p.t.Errorf("after Ctrl-C: %v; standard error: %s", err, p.stderr.String())
		}
	case <-time.After(20 * time.Second):
		p.t.Errorf("still running 20 s after Ctrl-C")
	}
}

package main

import (
	"bufio"
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"time"
)

// A contestant is a running process that has a recording in memory and does the job as often as it
// is told to.
type contestant struct {
	cmd    *exec.Cmd
	stdin  io.WriteCloser
	stdout *bufio.Reader
	stderr bytes.Buffer
	about  string // what it says of itself
}

// start starts one and waits until it is ready. env is added to the environment.
func start(ctx context.Context, env []string, argv ...string) (*contestant, error) {
	c := &contestant{cmd: exec.CommandContext(ctx, argv[0], argv[1:]...)}
	c.cmd.Env = append(os.Environ(), env...)
	c.cmd.Stderr = &c.stderr
	var err error
	if c.stdin, err = c.cmd.StdinPipe(); err != nil {
		return nil, err
	}
	stdout, err := c.cmd.StdoutPipe()
	if err != nil {
		return nil, err
	}
	c.stdout = bufio.NewReaderSize(stdout, 1<<16)
	if err := c.cmd.Start(); err != nil {
		return nil, err
	}
	c.about, err = c.line()
	return c, err
}

// line is the next line that it writes. When there is none, the process is ended, and the error
// holds what it wrote to standard error.
func (c *contestant) line() (string, error) {
	line, err := c.stdout.ReadString('\n')
	if err != nil {
		return "", errors.Join(fmt.Errorf("%s: %w", strings.Join(c.cmd.Args, " "), err), c.close())
	}
	return strings.TrimSpace(line), nil
}

// jobs has the job done n times and returns how long that took.
func (c *contestant) jobs(n int) (time.Duration, error) {
	began := time.Now()
	if _, err := fmt.Fprintln(c.stdin, n); err != nil {
		return 0, errors.Join(err, c.close())
	}
	answer, err := c.line()
	if err == nil && answer != "done" {
		err = fmt.Errorf("%s: it says %q where done is expected", c.cmd.Path, answer)
	}
	return time.Since(began), err
}

// results has it write its densities, which are then to be read from the reader.
func (c *contestant) results() (io.Reader, error) {
	_, err := fmt.Fprintln(c.stdin, "write")
	return c.stdout, err
}

// peakMiB is the most memory that it had in use (VmHWM, proc(5)).
func (c *contestant) peakMiB() (float64, error) {
	text, err := os.ReadFile(fmt.Sprintf("/proc/%d/status", c.cmd.Process.Pid))
	if err != nil {
		return 0, err
	}
	_, rest, _ := strings.Cut(string(text), "VmHWM:")
	kib, _, _ := strings.Cut(strings.TrimSpace(rest), " ")
	n, err := strconv.ParseFloat(kib, 64)
	return n / 1024, err
}

// close ends the process and waits for it.
func (c *contestant) close() error {
	c.stdin.Close()
	if err := c.cmd.Wait(); err != nil {
		return fmt.Errorf("%s: %w\n%s", c.cmd.Path, err, c.stderr.String())
	}
	return nil
}

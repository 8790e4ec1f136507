//go:build unix

package pipe

import (
	"fmt"
	"io/fs"
	"os"
	"syscall"
)

// Closable returns the pipe or socket behind f as a file whose Close ends a Read that waits. That of
// os.Stdin does not: Go leaves a descriptor that it was given blocking, and nothing wakes such a
// read. f is taken over and closed. What is no pipe and no socket is returned as it is: a Read
// of a regular file does not wait, and a terminal is shared with other programs, whom the change
// would disturb.
//
// Where the system has no such change, f is returned as it is.
func Closable(f *os.File) (*os.File, error) {
	info, err := f.Stat()
	if err != nil {
		return nil, fmt.Errorf("open the pipe: %w", err)
	}
	if info.Mode()&(fs.ModeNamedPipe|fs.ModeSocket) == 0 {
		return f, nil
	}
	conn, err := f.SyscallConn()
	if err != nil {
		return nil, fmt.Errorf("open the pipe: %w", err)
	}
	fd := -1
	var failed error
	if err := conn.Control(func(old uintptr) { fd, failed = another(int(old)) }); err != nil {
		return nil, fmt.Errorf("open the pipe: %w", err)
	}
	if failed != nil {
		return nil, fmt.Errorf("open the pipe: %w", failed)
	}
	f.Close()
	return os.NewFile(uintptr(fd), f.Name()), nil
}

// another is a descriptor of the same pipe that Go's poller can wait for, since it does not block.
func another(old int) (int, error) {
	// A child that is started in between must not keep the pipe open.
	syscall.ForkLock.RLock()
	defer syscall.ForkLock.RUnlock()
	fd, err := syscall.Dup(old)
	if err != nil {
		return -1, os.NewSyscallError("dup", err)
	}
	syscall.CloseOnExec(fd)
	if err := syscall.SetNonblock(fd, true); err != nil {
		syscall.Close(fd)
		return -1, os.NewSyscallError("fcntl", err)
	}
	return fd, nil
}

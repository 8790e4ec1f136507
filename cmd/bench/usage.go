package main

import (
	"bytes"
	"fmt"
	"os"
	"strconv"
	"strings"
	"time"
)

// A use is the processor time taken up to a moment.
type use struct {
	at          time.Time
	machine     time.Duration // by all programs, and by the host of a virtual machine
	contestants [contestants]time.Duration
}

// usage is the use so far.
func usage(running [contestants]*contestant) (u use, err error) {
	u.at = time.Now()
	if u.machine, err = machineTime(); err != nil {
		return u, err
	}
	for i, c := range running {
		if u.contestants[i], err = c.cpu(); err != nil {
			return u, err
		}
	}
	return u, nil
}

// machineTime is the time that all cores together were not idle (/proc/stat in proc(5)).
func machineTime() (time.Duration, error) {
	text, err := os.ReadFile("/proc/stat")
	if err != nil {
		return 0, err
	}
	line, _, _ := strings.Cut(string(text), "\n")
	// cpu user nice system idle iowait irq softirq steal; what follows is part of the others.
	fields := strings.Fields(line)
	if len(fields) < 9 {
		return 0, fmt.Errorf("/proc/stat: %q: eight numbers are expected", line)
	}
	return ticks(fields[1], fields[2], fields[3], fields[6], fields[7], fields[8])
}

// cpu is the processor time that a contestant has taken so far, all threads together.
func (c *contestant) cpu() (time.Duration, error) {
	text, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", c.cmd.Process.Pid))
	if err != nil {
		return 0, err
	}
	// What follows the name in brackets; user and system time are fields 14 and 15.
	fields := strings.Fields(string(text[bytes.LastIndexByte(text, ')')+1:]))
	if len(fields) < 13 {
		return 0, fmt.Errorf("/proc/%d/stat: %q: more fields are expected", c.cmd.Process.Pid, text)
	}
	return ticks(fields[11], fields[12])
}

// ticks is the sum of times in hundredths of a second, the unit of proc(5) on all common machines.
func ticks(numbers ...string) (time.Duration, error) {
	var sum int
	for _, number := range numbers {
		n, err := strconv.Atoi(number)
		if err != nil {
			return 0, err
		}
		sum += n
	}
	return time.Duration(sum) * 10 * time.Millisecond, nil
}

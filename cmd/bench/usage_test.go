package main

import (
	"testing"
	"time"
)

func TestAContestantUsesTimeAndMemory(t *testing.T) {
	c, err := start(t.Context(), nil, "sh", "-c", "echo ready; read n; i=0; while [ $i -lt 100000 ]; do i=$((i+1)); done; echo done; read n")
	if err != nil {
		t.Fatal(err)
	}
	took, err := c.jobs(1)
	if err != nil {
		t.Fatal(err)
	}
	after, err := usage([contestants]*contestant{c, c, c})
	if err != nil {
		t.Fatal(err)
	}
	if cpu := after.contestants[ours]; cpu <= 0 || cpu > took+50*time.Millisecond {
		t.Errorf("processor time %v of %v", cpu, took)
	}
	if after.machine < after.contestants[ours] {
		t.Errorf("the machine took %v, one process of it %v", after.machine, after.contestants[ours])
	}
	if mib, err := c.peakMiB(); err != nil || mib < 0.1 || mib > 100 {
		t.Errorf("peak memory %v MiB, %v", mib, err)
	}
	c.close() // says that the shell's last read found nothing
}

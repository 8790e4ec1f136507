package setup

import (
	"errors"
	"os"
	"strings"
	"testing"
)

func ExampleWriteFindings() {
	WriteFindings(os.Stdout, []Finding{
		{Stage: Low, Kind: PolaritySuspect, Severity: Stop, Number: -1, Text: "S1, A7z: mean sign of the power flow -1.00 over 412 lines: look which way they face"},
		{Stage: Idle, Kind: DCOffset, Severity: Look, Number: 0.7, Text: "A7z: mean +0.7 V, 7 % of its limit: couple the input AC"},
		{Stage: Low, Kind: PowerFlow, Severity: Info, Number: unknown, Text: "S2: power flow unknown"},
		{Stage: Low, Kind: Headroom, Severity: Info, Number: 18, Text: "S1: headroom 18.0 dB"},
		{Stage: Low, Kind: Headroom, Severity: Info, Number: 17, Text: "S2: headroom 17.0 dB"},
	})
	// Output:
	// stop  low   polarity-suspect  S1, A7z: mean sign of the power flow -1.00 over 412 lines: look which way they face
	// look  idle  dc-offset         A7z: mean +0.7 V, 7 % of its limit: couple the input AC
	// info  low   power-flow        S2: power flow unknown
	// info  low   headroom          S1: headroom 18.0 dB
	// info  low   headroom          S2: headroom 17.0 dB
	// 1 to stop for, 1 to look at, 1 unknown, 2 in order
	// Before a cable, sensor or stinger is touched: drive off, amplifier gains down, and nothing moves any more. Local rules and qualified people decide.
}

func TestSummary(t *testing.T) {
	for _, test := range []struct {
		findings []Finding
		want     string
	}{
		{nil, "nothing was checked"},
		{[]Finding{{Severity: Look}, {Severity: Look}, {Severity: Info}}, "2 to look at, 1 in order"},
		{[]Finding{{Severity: Look, Number: unknown}}, "1 to look at"},
		{[]Finding{{Severity: Info}}, "1 in order"},
	} {
		if got := Summary(test.findings); got != test.want {
			t.Errorf("%q, want %q", got, test.want)
		}
	}
}

type full struct{ left int }

func (f *full) Write(p []byte) (int, error) {
	if f.left--; f.left < 0 {
		return 0, errors.New("disk full")
	}
	return len(p), nil
}

func TestWriteFindingsReturnsTheWritersError(t *testing.T) {
	findings := []Finding{{Text: "S1: headroom"}}
	var all strings.Builder
	if err := WriteFindings(&all, findings); err != nil || strings.Contains(all.String(), Caution) {
		t.Fatalf("%q (%v): nobody has to go anywhere", all.String(), err)
	}
	failed := 0
	for left := range 20 {
		if WriteFindings(&full{left}, findings) != nil {
			failed++
		}
	}
	if failed < 2 || failed == 20 {
		t.Errorf("%d of 20 writers that break sooner or later were noticed", failed)
	}
}

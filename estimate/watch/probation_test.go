package watch

import (
	"fmt"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"shakerwatch/acquire/rig"
)

// probe runs judgements through a probation, one character a block, and returns the blocks in the order in which they
// left, 'A' averaged or a letter for why not. '.' is normal, 'x' abnormal, 'g' a gap, 'h' normal while a fault
// holds, 'p' kept out by the caller, 'X' abnormal and then a fault holds, 'r' abnormal and spoils the block before as well, 'u' before the watch is
// armed. The second result is how many left before the end.
func probe(blocks, onFault string, hop int) (string, int) {
	p := NewProbation(&rig.Rig{OnFault: onFault, Grid: rig.Grid{Block: 8, Hop: hop}})
	var out []Decision
	for k, c := range blocks {
		j := Judgement{Block: int64(k), From: int64(k) + 1, Armed: c != 'u' && c != 'p'}
		j.Compared = j.Armed && c != 'g'
		switch c {
		case 'p':
			j.Kind = "paused"
		case 'x', 'X', 'r':
			j.Kind, j.From = StructureChanged, int64(k)
		case 'g':
			j.Kind, j.From = Gap, int64(k)
			j.Armed = !strings.HasPrefix(blocks, "u")
		}
		if c == 'r' {
			j.From--
		}
		j.Holds = c == 'h' || c == 'X'
		out = p.Judged(out, j)
	}
	before := len(out)
	out = p.End(out)
	var s strings.Builder
	for k, d := range out {
		switch {
		case d.Block != int64(k):
			fmt.Fprintf(&s, "(%d)", d.Block)
		case d.Average && d.Kind == "":
			s.WriteByte('A')
		case d.Average:
			s.WriteByte('?')
		default:
			s.WriteByte(d.Kind[0])
		}
	}
	return s.String(), before
}

func TestProbation(t *testing.T) {
	for _, test := range []struct {
		blocks string
		want   string
		before int // decided before the end
		hop    int
		fault  string
	}{
		{"uuuuu", "AAAAA", 5, 4, "hold"},
		{"uugu", "AAgA", 4, 4, "hold"},
		{"uug", "AAg", 2, 4, "hold"},
		{"...p..", "AAApAA", 2, 4, "hold"}, // a pause does not let go what waits
		{"uu.....", "AAAAAAA", 4, 4, "hold"},
		{".....", "AAAAA", 1, 2, "hold"},
		{"........", "AAAAAAAA", 4, 2, "hold"}, // at 75 % four later ones are judged
		{"....x...", "AAAAsAAA", 5, 4, "hold"},
		{"....r...", "AAAssAAA", 5, 4, "hold"},
		{"r", "s", 0, 4, "hold"},
		{"......xXhh...", "AAAAhhsshhAAA", 10, 4, "hold"},
		{"..g..", "AAgAA", 1, 4, "hold"},
		{"..xXhhg..", "AAAAAAgAA", 9, 4, "carry-on"},
		{"..gxh", "AAgAA", 5, 4, "carry-on"},
	} {
		got, before := probe(test.blocks, test.fault, test.hop)
		if got != test.want || before != test.before {
			t.Errorf("%s, hop %d, %s: %s with %d before the end, want %s with %d", test.blocks, test.hop, test.fault, got, before, test.want, test.before)
		}
	}
}

// TestProbationOnAnything: every block leaves once and in order, and none is averaged that is abnormal or
// came while a fault held.
func TestProbationOnAnything(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		blocks := rapid.StringOfN(rapid.SampledFrom([]rune("....xghXr")), 0, 40, -1).Draw(t, "blocks")
		got, before := probe(blocks, "hold", rapid.IntRange(0, 8).Draw(t, "hop"))
		if len(got) != len(blocks) || strings.ContainsAny(got, "(?") || before > len(blocks) {
			t.Fatalf("%s left as %s", blocks, got)
		}
		for k := range blocks {
			if strings.ContainsRune("xXgrh", rune(blocks[k])) && got[k] == 'A' {
				t.Errorf("%s: block %d was averaged: %s", blocks, k, got)
			}
		}
	})
}

package watch

import (
	"strings"
	"testing"
)

// TestSentences: each kind has what its edges need, and its sentences say something whoever is accused.
func TestSentences(t *testing.T) {
	names := map[Kind]bool{}
	for i := range kinds {
		k := &kinds[i]
		if names[k.name] {
			t.Errorf("%s is in the table twice", k.name)
		}
		names[k.name] = true
		if k.raised == nil || (k.away > 0) != (k.cleared != nil) || k.away > 0 && k.standing == nil || k.hold == nil {
			t.Errorf("%s lacks a sentence or a length", k.name)
			continue
		}
		for _, by := range k.explainedBy {
			kindOf(by) // panics when there is none
		}
		if k.holds && !k.fault {
			t.Errorf("%s holds averaging and is no fault", k.name)
		}
		for _, cause := range []Cause{"", CauseMains} {
			s := said{
				finding: &finding{channels: []int{0, 1}, bandsHz: [][2]float64{{100, 120}}, cause: cause, value: 7, detail: "so"},
				names:   "S1 and S2", points: "point 7", sinceS: 61.5,
			}
			texts := []string{k.raised(s)}
			if k.cleared != nil {
				texts = append(texts, k.cleared(s))
			}
			for _, text := range texts {
				if strings.Contains(text, "%!") || !strings.HasSuffix(text, ".") || len(text) < 20 {
					t.Errorf("%s: %q", k.name, text)
				}
			}
			if k.standing != nil {
				if text := k.standing(s); strings.Contains(text, "%!") || strings.HasSuffix(text, ".") || text == "" {
					t.Errorf("%s stands: %q", k.name, text)
				}
			}
		}
	}
}

func TestSomeSentences(t *testing.T) {
	s := said{finding: &finding{channels: []int{1}, value: 8}, names: "S2", points: "point 14", sinceS: 61.52}
	for kind, want := range map[Kind]string{
		ForceNotReaching: "S2: the structure no longer follows this force since 61.5 s. Stop the shaker, then check the load cell's mount at point 14; averaging waits.",
		LevelChanged:     "S2: the level changed by +8.0 dB at 61.5 s and the structure still follows. Look at the gain and the drive, then start the average over.",
	} {
		if got := kindOf(kind).raised(s); got != want {
			t.Errorf("%s: %q, want %q", kind, got, want)
		}
	}
}

func TestList(t *testing.T) {
	for _, test := range []struct {
		names []string
		want  string
	}{
		{nil, ""},
		{[]string{"a"}, "a"},
		{[]string{"a", "b"}, "a and b"},
		{[]string{"a", "b", "c", "d"}, "a, b, c and d"},
		{[]string{"a", "b", "c", "d", "e", "f"}, "a, b, c, d and 2 more"},
	} {
		if got := list(test.names); got != test.want {
			t.Errorf("%q, want %q", got, test.want)
		}
	}
}

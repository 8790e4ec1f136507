package watch

import "testing"

// TestOnlyFollows: the figures are of simulated rigs.
func TestOnlyFollows(t *testing.T) {
	for _, test := range []struct {
		name                      string
		share, coherence, partial float64
		want                      bool
	}{
		{"not driven", 0.995, 0.97, 0.9, true},
		{"not driven, in noise", 0.45, 0.46, 0.2, true},
		{"driven behind a heavy armature", 0.81, 0.97, 0.97, false},
		{"driven, coupled", 0.56, 0.7, 0.97, false},
		{"driven, spring-like structure", 0.95, 0.1, 0.97, false},
		{"drives that are the same", 0.4, 0.99, 0.8, false},
		{"independent and not arriving", 0.5, 0.05, 0.01, false},
	} {
		if got := onlyFollows(test.share, test.coherence, test.partial); got != test.want {
			t.Errorf("%s: %t, want %t", test.name, got, test.want)
		}
	}
}

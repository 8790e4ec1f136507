package rig

import (
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"
)

// TestDocumentedRigFile reads the example of README.md: what users copy must be free of mistakes.
func TestDocumentedRigFile(t *testing.T) {
	text, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	blocks := regexp.MustCompile("(?s)```toml\n(.*?)```").FindAllSubmatch(text, -1)
	if len(blocks) == 0 {
		t.Fatal("README.md shows no rig file")
	}
	for i, block := range blocks {
		if _, err := Parse(fmt.Sprintf("README.md[%d]", i), block[1]); err != nil {
			t.Error(err)
		}
	}
}

func TestUnusedTableIsSaid(t *testing.T) {
	const text = `
[source]
rate = 48000
[analysis]
max_frequency = 1000
line_spacing = 0.5
[burst]
period_s = 2
[periodic]
period = 65536
[[force]]
channel = 1
name = "S1"
point = "7"
axis = "+z"
sensitivity = 0.01
[[response]]
channel = 2
name = "A7z"
point = "7"
axis = "+z"
sensitivity = 0.01
`
	r, err := Parse("rig.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	if r.Burst != (Burst{}) || r.Periodic != (Periodic{}) {
		t.Errorf("settings of an excitation that was not chosen: %+v %+v", r.Burst, r.Periodic)
	}
	var b strings.Builder
	if err := r.WriteTable(&b); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		`warning: [burst] is not used: excitation is "random"`,
		`warning: [periodic] is not used: excitation is "random"`,
	} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("the table does not say %q:\n%s", want, b.String())
		}
	}
}

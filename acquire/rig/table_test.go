package rig

import (
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "write the golden files anew; read the difference before you keep it")

func TestWriteTable(t *testing.T) {
	for _, name := range []string{"skid", "skid_burst", "skid_trigger", "skid_periodic"} {
		t.Run(name, func(t *testing.T) {
			r, err := Read(filepath.Join("testdata", name+".toml"))
			if err != nil {
				t.Fatal(err)
			}
			var b strings.Builder
			if err := r.WriteTable(&b); err != nil {
				t.Fatal(err)
			}
			golden := filepath.Join("testdata", name+".txt")
			if *update {
				if err := os.WriteFile(golden, []byte(b.String()), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(golden)
			if err != nil {
				t.Fatal(err)
			}
			if b.String() != string(want) {
				t.Errorf("got\n%s\nwant\n%s", b.String(), want)
			}
		})
	}
}

type fullDisk struct{ err error }

func (d fullDisk) Write([]byte) (int, error) { return 0, d.err }

func TestWriteTableReportsTheWriter(t *testing.T) {
	full := errors.New("no space left")
	if err := must(t, baseText).WriteTable(fullDisk{full}); !errors.Is(err, full) {
		t.Errorf("got %v", err)
	}
}

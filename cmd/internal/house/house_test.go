// Package house checks the rules that hold for all rooms together: which way imports point, and
// that every room says what it holds. It has nothing but tests.
package house

import (
	"go/ast"
	"go/parser"
	"go/token"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

const module = "shakerwatch"

// rooms stand in the order in which data goes through them; each may import those before it.
var rooms = []string{"acquire", "spectra", "estimate", "web", "cmd"}

// forbidden says what a room and those below it may not reach, and why.
var forbidden = []struct{ room, path, why string }{
	{"acquire", "gonum.org/v1/gonum/dsp/fourier", "sources know samples, not spectra"},
	{"spectra", "net/http", "spectra are computed wherever there are samples, also without a server"},
	{"estimate", "net/http", "an estimate is a pure function of a snapshot"},
	{"estimate", "github.com/gorilla/websocket", "an estimate is a pure function of a snapshot"},
	{"estimate", "sync", "an estimate knows no goroutines"},
	{"acquire/rig", module + "/acquire/wav", "the rig file does not know where samples come from"},
}

// goList asks for one fact of every package below a pattern.
func goList(t *testing.T, format, pattern string) []string {
	t.Helper()
	out, err := exec.Command("go", "list", "-f", format, pattern).CombinedOutput()
	if err != nil {
		t.Fatalf("go list %s: %v\n%s", pattern, err, out)
	}
	return strings.Fields(string(out))
}

func TestImportsPointOneWay(t *testing.T) {
	for i, room := range rooms {
		for _, path := range goList(t, `{{join .Imports "\n"}}`, module+"/"+room+"/...") {
			for _, later := range rooms[i+1:] {
				if path == module+"/"+later || strings.HasPrefix(path, module+"/"+later+"/") {
					t.Errorf("%s imports %s: data does not go that way", room, path)
				}
			}
		}
	}
}

func TestForbiddenImports(t *testing.T) {
	for _, f := range forbidden {
		if len(goList(t, `{{.Name}}`, f.path)) == 0 {
			t.Errorf("%s does not exist any more: mend the list", f.path)
		}
		for _, path := range goList(t, `{{join .Imports "\n"}}`, module+"/"+f.room+"/...") {
			if path == f.path {
				t.Errorf("%s imports %s: %s", f.room, path, f.why)
			}
		}
	}
}

func TestEveryRoomHasOneComment(t *testing.T) {
	dirs := goList(t, `{{.Dir}}`, module+"/...")
	if len(dirs) < len(rooms) {
		t.Fatalf("only %d packages found", len(dirs))
	}
	for _, dir := range dirs {
		files, err := filepath.Glob(filepath.Join(dir, "*.go"))
		if err != nil {
			t.Fatal(err)
		}
		comments := 0
		for _, file := range files {
			parsed, err := parser.ParseFile(token.NewFileSet(), file, nil, parser.PackageClauseOnly|parser.ParseComments)
			if err != nil {
				t.Fatal(err)
			}
			if hasText(parsed.Doc) {
				comments++
			}
		}
		if comments != 1 {
			t.Errorf("%s: %d files carry a package comment, want one", dir, comments)
		}
	}
}

func hasText(doc *ast.CommentGroup) bool { return doc != nil && doc.Text() != "" }

package static

import (
	"encoding/json"
	"io/fs"
	"os"
	"path"
	"regexp"
	"strings"
	"testing"
)

// own are the page's files that lie in the repository.
func own(t *testing.T) map[string]string {
	t.Helper()
	files := map[string]string{}
	err := fs.WalkDir(Page(), ".", func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || name == ChartLibrary {
			return err
		}
		text, err := fs.ReadFile(Page(), name)
		files[name] = string(text)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return files
}

func TestPageNamesNoOtherHost(t *testing.T) {
	const svg = "http://www.w3.org/2000/svg" // the name of a language; nothing is fetched there
	for name, text := range own(t) {
		text = strings.ReplaceAll(text, svg, "")
		if at := regexp.MustCompile(`(https?:)?//[a-zA-Z]`).FindStringIndex(text); at != nil {
			t.Errorf("%s names another host: %.60q", name, text[at[0]:])
		}
	}
}

// The server's policy runs no script and applies no style that stands in the page itself.
func TestPageHasNothingInline(t *testing.T) {
	html := own(t)["index.html"]
	for name, pattern := range map[string]string{
		"a script without a file": `<script(?:\s+(?:defer|type="module"))*\s*>`,
		"a style":                 `<style`,
		"a style attribute":       `\sstyle\s*=`,
		"a handler":               `\son[a-z]+\s*=`,
	} {
		if found := regexp.MustCompile(pattern).FindString(html); found != "" {
			t.Errorf("index.html has %s: %q", name, found)
		}
	}
}

func TestEveryFileIsUsed(t *testing.T) {
	files := own(t)
	files[ChartLibrary] = ""
	for name := range files {
		if name == "index.html" {
			continue
		}
		used := false
		for other, text := range files {
			used = used || other != name && (strings.Contains(text, `"`+name+`"`) || strings.Contains(text, `"./`+name+`"`))
		}
		if !used {
			t.Errorf("%s is embedded and used nowhere", name)
		}
	}
	for name, text := range files {
		for _, found := range regexp.MustCompile(`(?:src|href)="([a-z.]+)"|from "\./([a-z.]+)"`).FindAllStringSubmatch(text, -1) {
			if file := found[1] + found[2]; path.Ext(file) != "" {
				if _, ok := files[file]; !ok {
					t.Errorf("%s uses %s, which is not there", name, file)
				}
			}
		}
	}
}

// Names come from rig files: nothing may turn text into markup.
func TestScriptsMakeNoMarkupOfText(t *testing.T) {
	for name, text := range own(t) {
		for _, way := range []string{"innerHTML", "outerHTML", "insertAdjacentHTML", "document.write", "eval(", "new Function"} {
			if strings.Contains(text, way) {
				t.Errorf("%s uses %s", name, way)
			}
		}
	}
}

func TestLockFile(t *testing.T) {
	read := func(name string, into any) string {
		text, err := os.ReadFile(name)
		if err == nil {
			err = json.Unmarshal(text, into)
		}
		if err != nil {
			t.Fatal(err)
		}
		return string(text)
	}
	var wanted struct{ Dependencies map[string]string }
	var locked struct {
		Packages map[string]struct{ Version, Integrity string }
	}
	read("package.json", &wanted)
	text := read("package-lock.json", &locked)
	if strings.Contains(text, `"resolved"`) || strings.Contains(text, "//") {
		t.Error("the lock file says where packages were fetched: it must work with any registry")
	}
	if len(wanted.Dependencies) != 1 {
		t.Errorf("dependencies %v, want the chart library alone", wanted.Dependencies)
	}
	for name, version := range wanted.Dependencies {
		if locked.Packages["node_modules/"+name].Version != version {
			t.Errorf("%s %s is wanted, %q is locked", name, version, locked.Packages["node_modules/"+name].Version)
		}
	}
	for name, p := range locked.Packages {
		if name != "" && p.Integrity == "" {
			t.Errorf("%s is locked without a checksum", name)
		}
	}
}

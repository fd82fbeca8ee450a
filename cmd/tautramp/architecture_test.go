package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"go/ast"
	"go/parser"
	"go/token"
	"io"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// rooms lists what each package may import beside the standard library and
// its own subfolder of tests. It is the structure of the program: a change
// here is a change of design, and DEVELOPERS.md says why each arrow exists.
func rooms() map[string][]string {
	const (
		serial = "go.bug.st/serial"
		sys    = "golang.org/x/sys"
		toml   = "github.com/BurntSushi/toml"
		gonum  = "gonum.org/v1/gonum"
		plot   = "gonum.org/v1/plot"
	)
	return map[string][]string{
		"protocol":               {},
		"protocol/protocoltest":  {"protocol"},
		"acquire/mill":           {toml},
		"acquire/recording":      {"protocol", "acquire/mill"},
		"acquire/pairing":        {"protocol", "acquire/recording"},
		"acquire/port":           {serial, sys},
		"acquire/port/porttest":  {"acquire/port"},
		"acquire/simrig":         {"protocol", "acquire/mill"},
		"acquire/simrig/rigtest": {"protocol", "acquire/mill", "acquire/pairing", "acquire/simrig"},
		"acquire":                {"protocol", "acquire/mill", "acquire/recording"},
		"firmware-notes/sim":     {"protocol", "acquire/mill", "acquire/simrig", sys},
		"analyze/estimate":       {gonum},
		"analyze":                {"acquire/mill", "acquire/pairing", "analyze/estimate"},
		"analyze/gauge":          {"acquire/mill", "acquire/pairing", "analyze/estimate"},
		"analyze/findings":       {"acquire/mill", "acquire/pairing", "analyze", "analyze/estimate"},
		"analyze/report":         {"acquire/mill", "analyze", "analyze/estimate", "analyze/findings", "analyze/gauge", gonum, plot},
		"cmd/tautramp/station":   {"protocol", "acquire", "acquire/mill", "acquire/recording", "acquire/pairing", "analyze/estimate", "analyze/gauge"},
		"cmd/tautramp/visit":     {"protocol", "acquire", "acquire/mill", "acquire/recording", "acquire/pairing", "analyze", "analyze/estimate"},
		// page makes the events of recording that its viewers press, and reads no file.
		"cmd/tautramp/page": {"acquire/mill", "acquire/recording", "cmd/tautramp/station", "cmd/tautramp/visit"},
		"cmd/tautramp": {"protocol", "acquire", "acquire/mill", "acquire/recording", "acquire/pairing", "acquire/port", "acquire/simrig",
			"analyze", "analyze/estimate", "analyze/findings", "analyze/gauge", "analyze/report", "cmd/tautramp/station", "cmd/tautramp/visit", "cmd/tautramp/page", "github.com/spf13/pflag", sys},
	}
}

type goPackage struct {
	ImportPath string
	Dir        string
	Standard   bool
	Imports    []string
	GoFiles    []string
	CgoFiles   []string
	CFiles     []string
}

func listPackages(t *testing.T) []goPackage {
	t.Helper()
	cmd := exec.Command("go", "list", "-json=ImportPath,Dir,Imports,GoFiles,CgoFiles,CFiles", "tautramp/...")
	out, err := cmd.Output()
	if err != nil {
		t.Fatalf("go list: %v", err)
	}
	var packages []goPackage
	for dec := json.NewDecoder(bytes.NewReader(out)); ; {
		var p goPackage
		err := dec.Decode(&p)
		if errors.Is(err, io.EOF) {
			return packages
		}
		if err != nil {
			t.Fatal(err)
		}
		packages = append(packages, p)
	}
}

func TestImportsFollowTheTableOfRooms(t *testing.T) {
	table := rooms()
	for _, p := range listPackages(t) {
		room := strings.TrimPrefix(p.ImportPath, "tautramp/")
		allowed, ok := table[room]
		if !ok {
			t.Errorf("%s is not in the table of rooms", room)
			continue
		}
		for _, imported := range p.Imports {
			if !allowedImport(imported, allowed) {
				t.Errorf("%s imports %s", room, imported)
			}
		}
		if len(p.CgoFiles)+len(p.CFiles) > 0 {
			t.Errorf("%s holds C files, which break a build without cgo", room)
		}
	}
}

// allowedImport is true for the standard library, whose first element has no
// dot, and for what the table lists.
func allowedImport(path string, allowed []string) bool {
	if inside, ok := strings.CutPrefix(path, "tautramp/"); ok {
		return slices.Contains(allowed, inside)
	}
	first, _, _ := strings.Cut(path, "/")
	if !strings.Contains(first, ".") {
		return true
	}
	return slices.ContainsFunc(allowed, func(a string) bool {
		return path == a || strings.HasPrefix(path, a+"/")
	})
}

// pureRooms compute from what they are given; they may not reach outside.
func pureRooms() []string {
	return []string{"protocol", "acquire/pairing", "analyze", "analyze/estimate", "analyze/gauge", "analyze/findings"}
}

func TestPureRoomsReachNothingOutside(t *testing.T) {
	for _, p := range listPackages(t) {
		room := strings.TrimPrefix(p.ImportPath, "tautramp/")
		if !slices.Contains(pureRooms(), room) {
			continue
		}
		for _, imported := range p.Imports {
			if slices.Contains([]string{"os", "net", "os/exec", "math/rand"}, imported) {
				t.Errorf("%s imports %s", room, imported)
			}
		}
	}
}

// TestNoRoomHasHiddenState allows package variables only for sentinel errors,
// and where go:embed asks for one; init functions never; and the machine's
// clock never in a pure room.
func TestNoRoomHasHiddenState(t *testing.T) {
	for _, p := range listPackages(t) {
		room := strings.TrimPrefix(p.ImportPath, "tautramp/")
		for _, name := range p.GoFiles {
			file, err := parser.ParseFile(token.NewFileSet(), filepath.Join(p.Dir, name), nil, parser.ParseComments)
			if err != nil {
				t.Fatal(err)
			}
			for _, hidden := range hiddenState(file) {
				t.Errorf("%s/%s: %s", room, name, hidden)
			}
			if slices.Contains(pureRooms(), room) && callsTimeNow(file) {
				t.Errorf("%s/%s calls time.Now", room, name)
			}
		}
	}
}

func hiddenState(file *ast.File) []string {
	var found []string
	for _, decl := range file.Decls {
		switch d := decl.(type) {
		case *ast.FuncDecl:
			if d.Name.Name == "init" && d.Recv == nil {
				found = append(found, "an init function")
			}
		case *ast.GenDecl:
			if d.Tok != token.VAR || strings.Contains(docText(d.Doc), "//go:embed") {
				continue
			}
			for _, spec := range d.Specs {
				for _, name := range spec.(*ast.ValueSpec).Names {
					if !strings.HasPrefix(strings.ToLower(name.Name), "err") && name.Name != "_" {
						found = append(found, "package variable "+name.Name)
					}
				}
			}
		}
	}
	return found
}

// docText is a comment with its directives, which CommentGroup.Text leaves out.
func docText(doc *ast.CommentGroup) string {
	if doc == nil {
		return ""
	}
	var b strings.Builder
	for _, c := range doc.List {
		b.WriteString(c.Text)
	}
	return b.String()
}

func callsTimeNow(file *ast.File) bool {
	found := false
	ast.Inspect(file, func(n ast.Node) bool {
		sel, ok := n.(*ast.SelectorExpr)
		if !ok {
			return true
		}
		pkg, ok := sel.X.(*ast.Ident)
		found = found || ok && pkg.Name == "time" && sel.Sel.Name == "Now"
		return true
	})
	return found
}

func TestEveryRoomHasOnePackageComment(t *testing.T) {
	for _, p := range listPackages(t) {
		comments := 0
		for _, name := range p.GoFiles {
			file, err := parser.ParseFile(token.NewFileSet(), filepath.Join(p.Dir, name), nil, parser.PackageClauseOnly|parser.ParseComments)
			if err != nil {
				t.Fatal(err)
			}
			if file.Doc != nil {
				comments++
			}
		}
		if comments != 1 {
			t.Errorf("%s has %d package comments, want 1", p.ImportPath, comments)
		}
	}
}

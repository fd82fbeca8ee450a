package report

import (
	"bytes"
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"testing"

	"tautramp/acquire/mill"
)

// go test ./analyze/report -update writes the golden files of testdata anew;
// read the difference before it is committed.
func TestMain(m *testing.M) {
	flag.Bool("update", false, "write the golden files of testdata anew")
	flag.Parse()
	os.Exit(m.Run())
}

func updating() bool { return flag.Lookup("update").Value.String() == "true" }

// exactHere is false where fused multiply-add may move a last digit.
func exactHere() bool { return runtime.GOOS == "linux" && runtime.GOARCH == "amd64" }

func golden(t *testing.T, name string, got []byte) []byte {
	t.Helper()
	path := filepath.Join("testdata", name)
	if updating() {
		if err := os.WriteFile(path, got, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatalf("%v: go test ./analyze/report -update makes it", err)
	}
	return want
}

func sameBytes(t *testing.T, name string, got []byte) {
	t.Helper()
	want := golden(t, name, got)
	if bytes.Equal(got, want) {
		return
	}
	gotLines, wantLines := bytes.Split(got, []byte("\n")), bytes.Split(want, []byte("\n"))
	for i := range min(len(gotLines), len(wantLines)) {
		if !bytes.Equal(gotLines[i], wantLines[i]) {
			t.Fatalf("%s:%d\n got  %s\n want %s\nif that is meant: go test ./analyze/report -update", name, i+1, gotLines[i], wantLines[i])
		}
	}
	t.Fatalf("%s: %d lines, want %d", name, len(gotLines), len(wantLines))
}

func TestTextAndTableAreAsLastRead(t *testing.T) {
	r, m := t1(t), t1Meta()
	for _, s := range []mill.System{mill.US, mill.SI} {
		sameBytes(t, "t1-"+string(s)+".txt", written(t, func(b *bytes.Buffer) error { return Text(b, r, m, s) }))
		sameBytes(t, "t1-"+string(s)+".csv", written(t, func(b *bytes.Buffer) error { return CSV(b, r, m, s) }))
	}
}

func TestPicturesAreAsLastLookedAt(t *testing.T) {
	if !exactHere() {
		t.Skip("pictures are compared on linux/amd64 only")
	}
	r := t1(t)
	for _, p := range Plots() {
		sameBytes(t, "t1-"+string(p)+".svg", written(t, func(b *bytes.Buffer) error { return SVG(b, r, Meta{}, p, mill.US) }))
	}
}

func TestJSONIsAsLastRead(t *testing.T) {
	got := written(t, func(b *bytes.Buffer) error { return JSON(b, t1(t), t1Meta()) })
	if exactHere() {
		sameBytes(t, "t1.json", got)
		return
	}
	var a, b any
	for _, f := range []struct {
		text []byte
		into *any
	}{{got, &a}, {golden(t, "t1.json", got), &b}} {
		if err := json.Unmarshal(f.text, f.into); err != nil {
			t.Fatal(err)
		}
	}
	if diff := differs("result", a, b); diff != "" {
		t.Error(diff)
	}
}

// differs compares JSON values, numbers to 1e-8 of their size.
func differs(at string, got, want any) string {
	switch want := want.(type) {
	case map[string]any:
		got, ok := got.(map[string]any)
		if !ok || len(got) != len(want) {
			return at + ": not the same members"
		}
		for name, v := range want {
			if d := differs(at+"."+name, got[name], v); d != "" {
				return d
			}
		}
		return ""
	case []any:
		got, ok := got.([]any)
		if !ok || len(got) != len(want) {
			return at + ": not the same length"
		}
		for i, v := range want {
			if d := differs(fmt.Sprintf("%s[%d]", at, i), got[i], v); d != "" {
				return d
			}
		}
		return ""
	case float64:
		if got, ok := got.(float64); ok && math.Abs(got-want) <= 1e-8*math.Max(math.Abs(want), 1e-12) {
			return ""
		}
	}
	if got == want {
		return ""
	}
	return fmt.Sprintf("%s: %v, want %v", at, got, want)
}

func TestTheSameResultGivesTheSameBytes(t *testing.T) {
	first, second := t1(t), t1(t)
	m := t1Meta()
	for name, write := range writers(mill.US, m) {
		a := written(t, func(b *bytes.Buffer) error { return write(b, first) })
		b := written(t, func(b *bytes.Buffer) error { return write(b, second) })
		if !bytes.Equal(a, b) {
			t.Errorf("%s differs from one run to the next", name)
		}
		if len(a) == 0 {
			t.Errorf("%s is empty", name)
		}
	}
}

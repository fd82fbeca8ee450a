package protocol_test

import (
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

func spec(t *testing.T) string {
	t.Helper()
	text, err := os.ReadFile("SPEC.md")
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// matches are the first groups of a pattern in a text.
func matches(pattern, text string) []string {
	var out []string
	for _, m := range regexp.MustCompile(pattern).FindAllStringSubmatch(text, -1) {
		out = append(out, m[1])
	}
	return out
}

func clauses(t *testing.T) []string { return matches(`(?m)^(\d+\.\d+) `, spec(t)) }

func TestWorkedExchangeIsReal(t *testing.T) {
	text := spec(t)
	sent, answered := matches(`(?m)^> (.*)$`, text), matches(`(?m)^< (.*)$`, text)
	if len(sent) < 5 || len(answered) < 15 {
		t.Fatalf("found %d commands and %d records", len(sent), len(answered))
	}
	for _, line := range sent {
		c, bad := protocol.ParseCommand([]byte(line))
		if bad != nil {
			t.Errorf("%s: %v", line, bad)
		} else if back, err := protocol.AppendCommand(nil, c); err != nil || string(back) != line+"\n" {
			t.Errorf("%s: written as %q, %v", line, back, err)
		}
	}
	for _, line := range answered {
		r, bad := protocol.Parse([]byte(line))
		if bad != nil {
			t.Errorf("%s: %v", line, bad)
		} else if back, err := protocol.Append(nil, r); err != nil || string(back) != line+"\n" {
			t.Errorf("%s: written as %q, %v", line, back, err)
		}
	}
}

func TestEveryClauseInCodeStandsInTheSpec(t *testing.T) {
	known := clauses(t)
	files, err := filepath.Glob("*.go")
	if err != nil {
		t.Fatal(err)
	}
	found := 0
	for _, file := range files {
		source, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		cited := matches(`"(\d+\.\d+)"`, string(source))
		cited = append(cited, matches(`SPEC (\d+\.\d+)`, string(source))...)
		found += len(cited)
		for _, clause := range cited {
			if !slices.Contains(known, clause) {
				t.Errorf("%s cites clause %s", file, clause)
			}
		}
	}
	if found < 50 {
		t.Errorf("only %d citations found", found)
	}
}

func TestEveryClauseHasAVector(t *testing.T) {
	v, err := protocoltest.Load()
	if err != nil {
		t.Fatal(err)
	}
	var shown []string
	for _, d := range v.Decode {
		shown = append(shown, d.Clauses...)
	}
	for _, e := range v.Encode {
		shown = append(shown, e.Clauses...)
	}
	for _, c := range v.Commands {
		shown = append(shown, c.Clauses...)
	}
	for _, c := range v.Values {
		shown = append(shown, c.Clauses...)
	}
	known := clauses(t)
	for _, clause := range known {
		if !slices.Contains(shown, clause) {
			t.Errorf("no vector shows clause %s", clause)
		}
	}
	for _, clause := range shown {
		if !slices.Contains(known, clause) {
			t.Errorf("a vector names clause %s", clause)
		}
	}
}

func TestEveryClassHasAVectorAndARow(t *testing.T) {
	v, err := protocoltest.Load()
	if err != nil {
		t.Fatal(err)
	}
	shown := map[protocol.Class]bool{}
	for _, d := range v.Decode {
		for _, l := range d.Lines {
			shown[l.Class] = true
		}
	}
	source, err := os.ReadFile("protocol.go")
	if err != nil {
		t.Fatal(err)
	}
	inCode := matches(`Class = "([a-z-]+)"`, string(source))
	inSpec := matches("(?m)^\\| `([a-z-]+)` \\|", spec(t))
	slices.Sort(inCode)
	slices.Sort(inSpec)
	if !slices.Equal(inCode, inSpec) {
		t.Errorf("classes in code %q, in the spec %q", inCode, inSpec)
	}
	for _, class := range inCode {
		if !shown[protocol.Class(class)] {
			t.Errorf("no decode vector is refused as %s", class)
		}
	}
}

func TestUnitTableIsTheSpecs(t *testing.T) {
	rows := regexp.MustCompile("(?m)^\\| ([a-z]+) \\| `([^`]+)` \\| ([^ ]+) \\| ([^ ]+) \\|").FindAllStringSubmatch(spec(t), -1)
	units := protocol.Units()
	if len(rows) != len(units) {
		t.Fatalf("%d rows, %d units", len(rows), len(units))
	}
	for i, row := range rows {
		factor, err := strconv.ParseFloat(row[3], 64)
		if err != nil {
			t.Fatal(err)
		}
		offset, err := strconv.ParseFloat(row[4], 64)
		if err != nil {
			t.Fatal(err)
		}
		want := protocol.Unit{Code: row[2], Quantity: protocol.Quantity(row[1]), SI: factor, Offset: offset}
		if units[i] != want {
			t.Errorf("row %d: %+v, want %+v", i+1, units[i], want)
		}
	}
}

func TestLimitsAreTheSpecs(t *testing.T) {
	text := strings.Join(strings.Fields(spec(t)), " ")
	for _, sentence := range []string{
		fmt.Sprintf("2.3 **Length of a record.** At most %d bytes", protocol.MaxLine),
		fmt.Sprintf("2.4 **Length of a command.** At most %d bytes", protocol.MaxCommand),
		fmt.Sprintf("# The wire, version %d", protocol.Version),
		fmt.Sprintf("one counter of %d bits that runs", protocol.TickBits),
	} {
		if !strings.Contains(text, sentence) {
			t.Errorf("the spec does not say %q", sentence)
		}
	}
}

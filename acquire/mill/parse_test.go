package mill

import (
	"errors"
	"fmt"
	"strings"
	"testing"
)

// good is the least profile that Parse accepts; the line numbers of the tests
// below count from its first.
const good = `[mill]
name = "Quillfern Mill"
[[tensioner]]
name = "T-1"
set_by = "pressure"
setting_limit = "950 psi"
[[band]]
name = "QW-6"
thickness = "0.058 in"
net_width = "5.25 in"
modulus = "29 Mpsi"
[rig]
gauge_length = "20 in"
`

func TestLeastProfileIsAccepted(t *testing.T) {
	if _, err := Parse([]byte(good)); err != nil {
		t.Fatal(err)
	}
}

// replace gives good with one line changed.
func replace(t *testing.T, old, new string) string {
	t.Helper()
	if strings.Count(good, old) != 1 {
		t.Fatalf("%q stands %d times", old, strings.Count(good, old))
	}
	return strings.Replace(good, old, new, 1)
}

func TestParseRefusesWithLineAndKey(t *testing.T) {
	for _, c := range []struct {
		name, old, new string
		line           int
		key            string
		says           string // in problem or hint
	}{
		{"bare number", `"0.058 in"`, `0.058`, 9, "band.thickness", "0.058 has no unit"},
		{"bare whole number", `"20 in"`, `20`, 13, "rig.gauge_length", "20 has no unit"},
		{"number without a unit", `"0.058 in"`, `"0.058"`, 9, "band.thickness", "no unit"},
		{"unknown unit", `"950 psi"`, `"950 psy"`, 6, "tensioner.setting_limit", "Pa, kPa, MPa, GPa, bar, kgf/cm2, psi, ksi, Mpsi"},
		{"length for a pressure", `"950 psi"`, `"950 mm"`, 6, "tensioner.setting_limit", "mm is a unit of length, not of pressure"},
		{"torque for a pressure", `"950 psi"`, `"40 lbf ft"`, 6, "tensioner.setting_limit", "of torque, not of pressure"},
		{"zero thickness", `"0.058 in"`, `"0 in"`, 9, "band.thickness", "more than zero"},
		{"negative width", `"5.25 in"`, `"-5.25 in"`, 10, "band.net_width", "must not be negative"},
		{"zero gauge length", `"20 in"`, `"0 mm"`, 13, "rig.gauge_length", "more than zero"},
		{"not a number", `"20 in"`, `"nan in"`, 13, "rig.gauge_length", "not a number"},
		{"TOML's nan", `"20 in"`, `nan`, 13, "rig.gauge_length", "no unit"},
		{"huge", `"0.058 in"`, `"1e99 in"`, 9, "band.thickness", "far too large"},
		{"a table for a quantity", `"20 in"`, `{value = 20}`, 13, "rig.gauge_length", "a table has no unit"},
		{"no limit", `setting_limit = "950 psi"`, ``, 3, "tensioner.setting_limit", "nothing is measured without it"},
		{"zero limit", `"950 psi"`, `"0 psi"`, 6, "tensioner.setting_limit", "more than zero"},
		{"no set_by", `set_by = "pressure"`, ``, 3, "tensioner.set_by", "pressure, torque, turns or spring"},
		{"unknown set_by", `"pressure"`, `"weight"`, 5, "tensioner.set_by", "pressure, torque, turns, spring"},
		{"no gauge length", `gauge_length = "20 in"`, ``, 12, "rig.gauge_length", "knife edges"},
		{"no modulus", `modulus = "29 Mpsi"`, ``, 7, "band.modulus", "29.0 Mpsi"},
		{"empty name", `"T-1"`, `" "`, 4, "tensioner.name", "missing"},
		{"no name", `name = "QW-6"`, ``, 7, "band.name", "missing"},
		{"name of two lines", `"T-1"`, `"T\n1"`, 4, "tensioner.name", "one line"},
		{"endless name", `"T-1"`, `"` + strings.Repeat("T", 201) + `"`, 4, "tensioner.name", "200"},
		{"number for a name", `"T-1"`, `1`, 4, "tensioner.name", "1 is not text"},
		{"misspelt key", `thickness =`, `thicknes =`, 9, "band.thicknes", `did you mean "thickness"?`},
		{"key in capitals", `thickness =`, `Thickness =`, 9, "band.Thickness", `did you mean "thickness"?`},
		{"key of nothing like it", `[rig]`, "[rig]\nzzz = 1", 13, "rig.zzz", "known here: gauge_length, gauge_length_uncertainty, material, faces, temperature_difference, misalignment, curl, note"},
		{"unknown table", `[mill]`, "[milk]", 1, "milk", `did you mean "mill"?`},
		{"width at the gross", `net_width = "5.25 in"`, `net_width = "5.25 in"` + "\n" + `gross_width = "5.25 in"`, 10, "band.net_width", "not less than the gross width"},
		{"thicker than wide", `"0.058 in"`, `"5.8 in"`, 9, "band.thickness", "not less than the net width"},
		{"negative uncertainty", `modulus =`, "modulus_uncertainty = -0.01\nmodulus =", 11, "band.modulus_uncertainty", "between 0 and 0.5"},
		{"percent for a part", `modulus =`, "modulus_uncertainty = 1\nmodulus =", 11, "band.modulus_uncertainty", "between 0 and 0.5"},
		{"quantity for a plain number", `modulus =`, "modulus_uncertainty = \"1 %\"\nmodulus =", 11, "band.modulus_uncertainty", "plain number"},
		{"three faces", `[rig]`, "[rig]\nfaces = 3", 13, "rig.faces", "between 1 and 2"},
		{"half a face", `[rig]`, "[rig]\nfaces = 1.5", 13, "rig.faces", "whole number"},
		{"endless ratio", `set_by`, "travel_ratio = inf\nset_by", 5, "tensioner.travel_ratio", "between 0.001 and 1000"},
		{"ratio of nothing", `set_by`, "travel_ratio = 0\nset_by", 5, "tensioner.travel_ratio", "between 0.001 and 1000"},
		{"ratio not a number", `set_by`, "travel_ratio = nan\nset_by", 5, "tensioner.travel_ratio", "between 0.001 and 1000"},
		{"bore without cylinders", `set_by`, "bore = \"2.5 in\"\nset_by", 5, "tensioner.bore", "how many cylinders lift"},
		{"cylinders without bore", `set_by`, "cylinders = 2\nset_by", 5, "tensioner.cylinders", "inside diameter of one"},
		{"thicker than any band", `"0.058 in"`, `"1.47 in"`, 9, "band.thickness", "above 1 in (25.4 mm)"},
		{"modulus of nothing like steel", `"29 Mpsi"`, `"29 ksi"`, 11, "band.modulus", "outside 100 to 300 GPa"},
		{"modulus too stiff", `"29 Mpsi"`, `"2050 GPa"`, 11, "band.modulus", "outside 100 to 300 GPa"},
		{"target of a wrong unit", `modulus =`, "target = \"9500 MPa\"\nmodulus =", 11, "band.target", "above 150,000 psi (1,034 MPa)"},
		{"measure without quote marks", `"950 psi"`, `62 bar # limit`, 6, "tensioner.setting_limit", `put quote marks around it: setting_limit = "62 bar"`},
		{"measure stuck together without quote marks", `"20 in"`, `508mm`, 13, "rig.gauge_length", `gauge_length = "508mm"`},
		{"unknown hold", `set_by`, "hold = \"shut\"\nset_by", 5, "tensioner.hold", "maintained, locked"},
		{"misspelt in the rehearsal", `[[band]]`, "[tensioner.rehearsal]\nfriction = \"1 lbf\"\n[[band]]", 8, "tensioner.rehearsal.friction", "friction_constant"},
		{"mill twice over", `[mill]`, `[[mill]]`, 1, "mill", "write it once"},
		{"tensioner with one bracket", `[[tensioner]]`, `[tensioner]`, 3, "tensioner", "two brackets"},
		{"not TOML", `name = "T-1"`, `name = T-1`, 4, "tensioner.name", "not TOML"},
		{"key twice", `name = "T-1"`, "name = \"T-1\"\nname = \"T-1\"", 5, "tensioner.name", "already"},
	} {
		t.Run(c.name, func(t *testing.T) {
			first := firstFault(t, replace(t, c.old, c.new))
			if first.Line != c.line || first.Key != c.key {
				t.Errorf("line %d, key %q; want line %d, key %q", first.Line, first.Key, c.line, c.key)
			}
			if text := first.Error(); !strings.Contains(text, c.says) {
				t.Errorf("got %q; want %q in it", text, c.says)
			}
		})
	}
}

// firstFault parses what must be refused.
func firstFault(t *testing.T, text string) *ProfileError {
	t.Helper()
	p, err := Parse([]byte(text))
	var first *ProfileError
	if p != nil || !errors.As(err, &first) {
		t.Fatalf("got %v, %v", p, err)
	}
	return first
}

func TestParseReportsAllFaultsInLineOrder(t *testing.T) {
	text := strings.NewReplacer(`"950 psi"`, `"950 psy"`, `"0.058 in"`, `0`, `"20 in"`, `"0 in"`, "[mill]\nname", "[mill]\nnick").Replace(good)
	_, err := Parse([]byte(text))
	joined, ok := err.(interface{ Unwrap() []error })
	if !ok {
		t.Fatalf("got %T", err)
	}
	var got []string
	for _, e := range joined.Unwrap() {
		var fault *ProfileError
		if !errors.As(e, &fault) {
			t.Fatalf("%T among the faults", e)
		}
		got = append(got, fmt.Sprint(fault.Line, " ", fault.Key))
	}
	want := "1 mill.name|2 mill.nick|6 tensioner.setting_limit|9 band.thickness|13 rig.gauge_length"
	if strings.Join(got, "|") != want {
		t.Errorf("got  %s\nwant %s", strings.Join(got, "|"), want)
	}
}

// One missing line shall not hide what is wrong with the figures.
func TestDoubtsAreToldBesideFaults(t *testing.T) {
	text := strings.NewReplacer("setting_limit = \"950 psi\"\n", "", `"0.058 in"`, `"0.58 in"`).Replace(good)
	_, err := Parse([]byte(text))
	for _, want := range []string{"tensioner.setting_limit: missing", "look again too: band QW-6: thickness 0.58 in is outside"} {
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v; want %q in it", err, want)
		}
	}
	if err != nil && strings.Contains(err.Error(), "instrument") {
		t.Errorf("what is missing is no doubt about a figure: %v", err)
	}
}

func TestParseNamesMissingTables(t *testing.T) {
	_, err := Parse(nil)
	for _, want := range []string{"mill: missing; write [mill]", "[[tensioner]]", "[[band]]", "[rig]"} {
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v; want %q in it", err, want)
		}
	}
}

func TestParseRefusesNamesThatStandTwice(t *testing.T) {
	again := good + "[[band]]\nname = \"QW-6\"\nthickness = \"1 mm\"\nnet_width = \"40 mm\"\nmodulus = \"200 GPa\"\n"
	if f := firstFault(t, again); f.Line != 15 || f.Key != "band.name" || !strings.Contains(f.Problem, `"QW-6" stands twice`) {
		t.Errorf("got %v", f)
	}
	if _, err := Parse([]byte(strings.Replace(again, "QW-6", "T-1", 1))); err != nil {
		t.Errorf("a band named like a tensioner: %v", err)
	}
}

func TestParseMatchesLimitToSetting(t *testing.T) {
	for by, limits := range map[string][2]string{
		"pressure": {"65 bar", "54 N m"},
		"torque":   {"54 N m", "54 N"},
		"turns":    {"12 turns", "12 mm"},
		"spring":   {"40 mm", "40 bar"},
	} {
		text := replace(t, `"pressure"`, `"`+by+`"`)
		if _, err := Parse([]byte(strings.Replace(text, "950 psi", limits[0], 1))); err != nil {
			t.Errorf("%s: %v", by, err)
		}
		if f := firstFault(t, strings.Replace(text, "950 psi", limits[1], 1)); f.Key != "tensioner.setting_limit" {
			t.Errorf("%s with %q: %v", by, limits[1], f)
		}
	}
	screw := strings.NewReplacer(`"pressure"`, `"torque"`, "950 psi", "40 lbf ft", "set_by", "hold = \"locked\"\nset_by").Replace(good)
	if f := firstFault(t, screw); f.Line != 5 || f.Key != "tensioner.hold" {
		t.Errorf("a screw that holds oil: %v", f)
	}
}

func TestParseInstruments(t *testing.T) {
	text := func(lines string) string { return good + "[[instrument]]\n" + lines }
	p, err := Parse([]byte(text("name = \"a\"\nmeasures = \"extension\"\nlimit = \"3 um\"\ndue = 2027-03-31\n")))
	if err != nil {
		t.Fatal(err)
	}
	if got := p.Instruments[0]; got.Due != "2027-03-31" || got.Limit.String() != "3 um" || got.Measures != MeasuresExtension {
		t.Errorf("got %+v", got)
	}
	for name, c := range map[string]struct{ lines, key string }{
		"no measures":          {"name = \"a\"\n", "instrument.measures"},
		"measures weight":      {"name = \"a\"\nmeasures = \"weight\"\n", "instrument.measures"},
		"limit of a length":    {"name = \"a\"\nmeasures = \"extension\"\nlimit = \"3 psi\"\n", "instrument.limit"},
		"limit of a force":     {"name = \"a\"\nmeasures = \"setting\"\nlimit = \"3 lbf\"\n", "instrument.limit"},
		"no such day":          {"name = \"a\"\nmeasures = \"setting\"\ndue = \"2027-02-30\"\n", "instrument.due"},
		"a day the other way":  {"name = \"a\"\nmeasures = \"setting\"\ndue = \"31.03.2027\"\n", "instrument.due"},
		"a number for the day": {"name = \"a\"\nmeasures = \"setting\"\ndue = 2027\n", "instrument.due"},
	} {
		if f := firstFault(t, text(c.lines)); f.Key != c.key {
			t.Errorf("%s: %v", name, f)
		}
	}
}

func TestParseTakesWhatEditorsMakeOfAFile(t *testing.T) {
	crlf := "\ufeff" + strings.ReplaceAll(good, "\n", "\r\n")
	if _, err := Parse([]byte(crlf)); err != nil {
		t.Errorf("byte order mark and CRLF: %v", err)
	}
	if f := firstFault(t, strings.Replace(crlf, `"20 in"`, `20`, 1)); f.Line != 13 {
		t.Errorf("line %d with CRLF, want 13", f.Line)
	}
	if f := firstFault(t, strings.Repeat("# much too long\n", 20000)); !strings.Contains(f.Problem, "too long") {
		t.Errorf("got %v", f)
	}
	utf16 := "\xff\xfe[\x00m\x00i\x00l\x00l\x00]\x00"
	if f := firstFault(t, utf16); f.Problem == "" {
		t.Error("UTF-16 is refused without a reason")
	}
}

// Parse must neither panic nor give a fault a line that the file has not.
func FuzzParse(f *testing.F) {
	f.Add([]byte(good))
	f.Add(Example())
	f.Add([]byte("tensioner = [{name = 'a'}, {name = 'b',\n}]\nband = 1\n[rig.gauge_length]\n"))
	f.Add([]byte("a.\"b.c\".d = '''\n[x]\n''' # c\n[[a.e]]\n[a.e.f]\n[[a.e.g]]\nh = [[1,\n2], [3]]\n"))
	f.Add([]byte("\ufeff[mill]\r\nname=\"\"\"a\"\"\"\"\"\r\n"))
	f.Fuzz(func(t *testing.T, text []byte) {
		p, err := Parse(text)
		if (p == nil) == (err == nil) {
			t.Fatalf("gave %v and %v", p, err)
		}
		if err == nil {
			p.Cautions()
			return
		}
		var fault *ProfileError
		if !errors.As(err, &fault) {
			t.Fatalf("an error that is no fault: %v", err)
		}
		if most := strings.Count(string(text), "\n") + 1; fault.Line < 0 || fault.Line > most {
			t.Errorf("line %d of %d: %v", fault.Line, most, fault)
		}
	})
}

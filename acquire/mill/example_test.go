package mill

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/BurntSushi/toml"
)

func TestExampleIsTheInventedMill(t *testing.T) {
	p, err := Parse(Example())
	if err != nil {
		t.Fatal(err)
	}
	t1, err := p.FindTensioner("T-1")
	if err != nil {
		t.Fatal(err)
	}
	qw6, err := p.FindBand("QW-6")
	if err != nil {
		t.Fatal(err)
	}
	for what, pair := range map[string][2]string{
		"limit":       {t1.SettingLimit.String(), "950 psi"},
		"bore":        {t1.Bore.String(), "2.5 in"},
		"thickness":   {qw6.Thickness.String(), "0.058 in"},
		"net width":   {qw6.NetWidth.String(), "5.25 in"},
		"target":      {qw6.Target.String(), "9500 psi"},
		"gauge":       {p.Rig.GaugeLength.String(), "20.00 in"},
		"friction":    {t1.Rehearsal.FrictionConstant.String(), "210 lbf"},
		"weight":      {t1.Rehearsal.Weight.String(), "820 lbf"},
		"mill":        {p.Mill.Name, "Quillfern Mill"},
		"serviced by": {p.Mill.ServicedBy, "Brindlewick Saw & Mill Service"},
	} {
		if pair[0] != pair[1] {
			t.Errorf("%s is %q, want %q", what, pair[0], pair[1])
		}
	}
	if t1.Cylinders != 2 || t1.TravelRatio != 1 || t1.Rehearsal.FrictionProportional != 0.045 {
		t.Errorf("T-1 is %+v with %+v", t1, t1.Rehearsal)
	}
	for _, band := range []string{"QM-2", "QN-17"} {
		if _, err := p.FindBand(band); err != nil {
			t.Error(err)
		}
	}
	t2, err := p.FindTensioner("T-2")
	if err != nil || t2.SetBy != SetByTorque || t2.Screw == nil || t2.Turns == nil || t2.Spring == nil {
		t.Fatalf("T-2 is %+v, %v", t2, err)
	}
	if s := t2.Screw; s.Diameter.SI != 0.024 || s.Lead.SI != 0.005 || math.Abs(s.PitchDiameterM()-0.0215) > 1e-15 || s.ThreadFriction != 0.1 || s.CollarFriction != 0.02 || s.CollarRadius.SI != 0.014 || s.RestTorque.SI != 0.3 {
		t.Errorf("T-2 has the screw %+v", s)
	}
	if r := t2.Rehearsal; r.FrictionThread != 0.1 || r.FrictionCollar != 0.02 || r.RestTorque.SI != 0.3 || math.Abs(r.Play.SI-0.1*math.Pi) > 1e-15 {
		t.Errorf("T-2 pretends %+v", r)
	}
	if c := p.Cautions(); len(c) != 0 {
		t.Errorf("the example itself raises doubts: %q", c)
	}
}

// A key that the reader knows must stand in the example, and must be explained
// where it stands first.
func TestExampleExplainsEveryKey(t *testing.T) {
	var root map[string]any
	if err := toml.Unmarshal(Example(), &root); err != nil {
		t.Fatal(err)
	}
	f := &faults{lines: keyLines(string(Example()))}
	explained := map[string]bool{} // by the path without numbers; false while it has not been seen
	take := func(path string, values any, read func(*table)) {
		table := &table{faults: f, path: path, values: values.(map[string]any)}
		read(table)
		explainedAt(t, f.lines, table, explained)
	}
	below := func(kind, key string, read func(*table)) {
		for i, values := range root[kind].([]map[string]any) {
			if sub, ok := values[key]; ok {
				take(fmt.Sprintf("%s.%d.%s", kind, i, key), sub, read)
			}
		}
	}
	take("", root, func(t *table) { readProfile(t) })
	take("mill", root["mill"], func(t *table) { readMill(t) })
	take("rig", root["rig"], func(t *table) { readRig(t) })
	for kind, read := range map[string]func(*table){
		"tensioner":   func(t *table) { readTensioner(t) },
		"band":        func(t *table) { readBand(t) },
		"instrument":  func(t *table) { readInstrument(t) },
		"gauge_limit": func(t *table) { readGaugeLimit(t) },
	} {
		for i, values := range root[kind].([]map[string]any) {
			take(fmt.Sprintf("%s.%d", kind, i), values, read)
		}
	}
	below("tensioner", "screw", func(t *table) { readScrew(t) })
	below("tensioner", "turns", func(t *table) { readTurns(t) })
	below("tensioner", "spring", func(t *table) { readSpring(t) })
	below("tensioner", "rehearsal", func(t *table) { readRehearsal(t) })
	below("tensioner", "dial", func(t *table) { readDialFace(t, Tensioner{SetBy: SetByPressure}) })
	below("instrument", "bench", func(t *table) {
		readBench(t, []Dim{DimPressure})
		for i, point := range t.values["point"].([]map[string]any) {
			take(t.at(fmt.Sprintf("point.%d", i)), point, func(t *table) { readBenchPoint(t, nil, []Dim{DimPressure}) })
		}
	})
	for path, seen := range explained {
		if !seen {
			t.Errorf("%s is not in the example", path)
		}
	}
	if len(f.found) != 0 {
		t.Errorf("faults in the example: %v", f.err())
	}
}

// explainedAt notes the keys that the table knows, and demands a remark where
// one stands first.
func explainedAt(t *testing.T, at map[string]int, read *table, seen map[string]bool) {
	t.Helper()
	lines := strings.Split(string(Example()), "\n")
	for _, key := range read.known {
		path := withoutNumbers(read.at(key))
		before := seen[path]
		seen[path] = before || read.has(key)
		if before || !read.has(key) {
			continue
		}
		if line := lines[lineOf(at, read.at(key))-1]; !strings.HasPrefix(line, "[") && !strings.Contains(line, "#") {
			t.Errorf("%s is not explained: %s", read.at(key), line)
		}
	}
}

func TestCautionsNameTheDoubt(t *testing.T) {
	for _, c := range []struct{ name, old, new, says string }{
		{"a band of an odd gauge", `thickness = "0.058 in"`, `thickness = "0.35 in"`, "band QW-6: thickness 0.35 in is outside"},
		{"width near the thickness", "net_width = \"1.73 in\"\ngross_width = \"2.00 in\"", "net_width = \"0.45 in\"", "net width 0.45 in is less than 10 times"},
		{"a band wider than any", "net_width = \"1.73 in\"\ngross_width = \"2.00 in\"", "net_width = \"24.5 in\"", "net width 24.5 in is outside"},
		{"bar typed as kPa", `setting_limit = "950 psi"`, `setting_limit = "65 kPa"`, "setting limit 65 kPa is outside"},
		{"psi typed as bar", `setting_limit = "950 psi"`, `setting_limit = "950 bar"`, "setting limit 950 bar is outside"},
		{"stress of another kind", `target = "9500 psi"`, `target = "45000 psi"`, "target 45000 psi is outside"},
		{"bore in mm as inches", `bore = "2.5 in"`, `bore = "63 in"`, "bore 63 in is outside"},
		{"limit beyond the binding spring", "set_by = \"torque\"                # a screw, turned with a torque wrench\nsetting_limit = \"40 lbf ft\"", "set_by = \"spring\"\nsetting_limit = \"65 mm\"", "tensioner T-2: the setting limit 65 mm lies beyond the length 68 mm"},
		{"a thick screw", `diameter = "24 mm" `, `diameter = "0.24 m" `, "tensioner T-2: screw diameter 0.24 m is outside"},
		{"a soft spring", `rate = "1.2 kN/mm" `, `rate = "1.2 N/m" `, "tensioner T-2: spring rate 1.2 N/m is outside"},
		{"inches typed as mm", `thickness = "0.058 in"`, `thickness = "0.058 mm"`, "band QW-6: thickness 0.058 mm is outside"},
		{"width in mm as inches", "net_width = \"1.73 in\"\ngross_width = \"2.00 in\"", "net_width = \"133 in\"", "net width 133 in is outside"},
		{"teeth too deep", `net_width = "5.25 in"`, `net_width = "4.1 in"`, "more than 30 % below"},
		{"soft modulus", `modulus = "29.0 Mpsi"        #`, `modulus = "17 Mpsi" #`, "modulus 17 Mpsi is outside"},
		{"no geometry", "cylinders = 2                # number of cylinders that lift the wheel together\nbore = \"2.5 in\"", "", "checked against geometry"},
		{"odd ratio", "travel_ratio = 1 ", "travel_ratio = 12", "travel ratio 12"},
		{"short rig", `gauge_length = "20.00 in"`, `gauge_length = "20 mm"`, "gauge length 20 mm"},
		{"aluminium bar", `material = "steel"`, `material = "aluminium"`, "a bar of aluminium"},
		{"no limit", `limit = "0.003 mm"`, ``, "instrument digital indicator: no limit"},
		{"no due day", `due = "2027-02-01"`, ``, "instrument digital indicator: no day"},
		{"no instrument", `measures = "extension"`, `measures = "setting"`, "no instrument for the stretch"},
	} {
		t.Run(c.name, func(t *testing.T) {
			text := string(Example())
			if !strings.Contains(text, c.old) {
				t.Fatalf("%q is not in the example", c.old)
			}
			p, err := Parse([]byte(strings.Replace(text, c.old, c.new, 1)))
			if err != nil {
				t.Fatal(err)
			}
			found := slices.ContainsFunc(p.Cautions(), func(s string) bool { return strings.Contains(s, c.says) })
			if !found {
				t.Errorf("got %q; want %q in it", p.Cautions(), c.says)
			}
		})
	}
}

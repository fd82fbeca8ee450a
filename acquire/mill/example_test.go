package mill

import (
	"fmt"
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
	if t2, err := p.FindTensioner("T-2"); err != nil || t2.SetBy != SetByTorque {
		t.Errorf("T-2 is set by %q, %v", t2.SetBy, err)
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
	lines := strings.Split(string(Example()), "\n")
	explained := func(read *table) {
		for _, key := range read.known {
			path := read.at(key)
			if !read.has(key) {
				t.Errorf("%s is not in the example", path)
				continue
			}
			if line := lines[lineOf(f.lines, path)-1]; !strings.HasPrefix(line, "[") && !strings.Contains(line, "#") {
				t.Errorf("%s is not explained: %s", path, line)
			}
		}
	}
	top := &table{faults: f, values: root}
	readProfile(top)
	explained(top)
	for kind, read := range map[string]func(*table){
		"mill": func(t *table) { readMill(t) },
		"rig":  func(t *table) { readRig(t) },
	} {
		sub := &table{faults: f, path: kind, values: root[kind].(map[string]any)}
		read(sub)
		explained(sub)
	}
	for kind, read := range map[string]func(*table){
		"tensioner": func(t *table) { readTensioner(t) },
		"band":      func(t *table) { readBand(t) },
	} {
		sub := &table{faults: f, path: kind + ".0", values: root[kind].([]map[string]any)[0]}
		read(sub)
		explained(sub)
		if kind == "tensioner" {
			rehearsal := &table{faults: f, path: sub.at("rehearsal"), values: sub.values["rehearsal"].(map[string]any)}
			readRehearsal(rehearsal)
			explained(rehearsal)
			dial := &table{faults: f, path: sub.at("dial"), values: sub.values["dial"].(map[string]any)}
			readDialFace(dial, Tensioner{SetBy: SetByPressure})
			explained(dial)
		}
	}
	for kind, read := range map[string]func(*table){
		"instrument":  func(t *table) { readInstrument(t) },
		"gauge_limit": func(t *table) { readGaugeLimit(t) },
	} {
		var all []*table
		for i, values := range root[kind].([]map[string]any) {
			sub := &table{faults: f, path: fmt.Sprintf("%s.%d", kind, i), values: values}
			read(sub)
			all = append(all, sub)
		}
		explainedBetween(t, all, lines)
	}
	for i, values := range root["instrument"].([]map[string]any) {
		bench, ok := values["bench"].(map[string]any)
		if !ok {
			continue
		}
		sub := &table{faults: f, path: fmt.Sprintf("instrument.%d.bench", i), values: bench}
		readBench(sub, []Dim{DimPressure})
		explained(sub)
		point := &table{faults: f, path: sub.at("point.0"), values: bench["point"].([]map[string]any)[0]}
		readBenchPoint(point, nil, []Dim{DimPressure})
		explained(point)
	}
	if len(f.found) != 0 {
		t.Errorf("faults in the example: %v", f.err())
	}
}

// explainedBetween asks that each key of a kind stands in one of its tables,
// explained.
func explainedBetween(t *testing.T, all []*table, lines []string) {
	t.Helper()
	stands := map[string]bool{}
	for _, sub := range all {
		for _, key := range sub.known {
			line := ""
			if sub.has(key) {
				line = lines[lineOf(sub.faults.lines, sub.at(key))-1]
			}
			stands[key] = stands[key] || strings.HasPrefix(line, "[") || strings.Contains(line, "#")
		}
	}
	for key, ok := range stands {
		if !ok {
			t.Errorf("%s is nowhere explained in the example", all[0].at(key))
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
		{"set by spring length", "set_by = \"torque\"                # a screw, turned with a torque wrench\nsetting_limit = \"40 lbf ft\"", "set_by = \"spring\"\nsetting_limit = \"4 in\"", "tensioner T-2: a spring gets shorter"},
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

package gauge

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"tautramp/acquire/mill"
)

func setting(t *testing.T, text string) mill.Setting {
	t.Helper()
	q, err := mill.ParseQuantity(text)
	if err != nil {
		t.Fatal(err)
	}
	return mill.Setting{Quantity: q}
}

func builtIn(t *testing.T, name string) Plan {
	t.Helper()
	text, err := PlanText(name)
	if err != nil {
		t.Fatal(err)
	}
	p, err := ParsePlan(text)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func TestEveryBuiltInPlanComesBackFromItsText(t *testing.T) {
	for _, name := range PlanNames() {
		p := builtIn(t, name)
		if !p.High.Given() {
			var err error
			if p, err = p.For(mill.Setting{}, setting(t, "1500 psi")); err != nil {
				t.Fatal(err)
			}
		}
		again, err := ParsePlan(p.Encode())
		if err != nil || !reflect.DeepEqual(p, again) {
			t.Errorf("%s:\n%s\n%+v\n%+v %v", name, p.Encode(), p, again, err)
		}
	}
	if len(PlanNames()) != 4 {
		t.Errorf("plans %v", PlanNames())
	}
}

func TestADialPlanAsksEachMarkUpAndDownInEachSeries(t *testing.T) {
	p, err := builtIn(t, "dial").For(mill.Setting{}, setting(t, "1500 psi"))
	if err != nil {
		t.Fatal(err)
	}
	all := p.Targets()
	if len(all) != 2*(10+9) {
		t.Fatalf("%d targets", len(all))
	}
	if all[0].Nominal.Entered != "150 psi" || all[9].Nominal.Entered != "1500 psi" || all[10].Nominal.Entered != "1350 psi" {
		t.Error(all[0], all[9], all[10])
	}
	if all[10].Direction != Down || all[18].Series != Untapped || all[19].Series != Tapped || all[19].Direction != Up {
		t.Error(all[10], all[18], all[19])
	}
}

func TestACompoundRangeHasItsPoints(t *testing.T) {
	p, err := builtIn(t, "transducer").For(setting(t, "-1 bar"), setting(t, "5 bar"))
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(p.SpanSI()-6e5) > 1e-6 || p.Points[0].Entered != "-1 bar" || p.Points[1].Entered != "0.2 bar" {
		t.Error(p.SpanSI(), p.Points)
	}
}

func TestABadPlanIsRefusedWithItsLine(t *testing.T) {
	for text, want := range map[string]string{
		"name = \"a\"\nkind = \"sundial\"\nsteps = 3":                                             "line 2: kind",
		"name = \"a\"\nkind = \"dial\"":                                                           "points: missing",
		"name = \"a\"\nkind = \"dial\"\npoints = [\"2 psi\", \"1 psi\"]":                          "line 3: points: 1 psi does not rise",
		"name = \"a\"\nkind = \"dial\"\npoints = [\"2 psi\", \"3 mm\"]":                           "of another kind",
		"name = \"a\"\nkind = \"rig\"\npoints = [\"2 psi\", \"3 psi\"]":                           "unit of pressure",
		"name = \"a\"\nkind = \"dial\"\npoints = [\"2\", \"3 psi\"]":                              "no unit",
		"name = \"a\"\nkind = \"rig\"\nsteps = 4\nseries = [\"tapped\"]":                          "tapping belongs to a dial",
		"name = \"a\"\nkind = \"dial\"\nsteps = 4\nrepeats = 0":                                   "line 4: repeats",
		"name = \"a\"\nkind = \"dial\"\nsteps = 4\nsetle_seconds = 3":                             `did you mean "settle_seconds"`,
		"name = \"a\"\nkind = \"dial\"\nsteps = 4\nrange_high = \"1 psi\"\nrange_low = \"2 psi\"": "is not above",
		"name = \"a\"\nkind = \"dial\"\nsteps = 4\nfind = \"sweep\"":                              "without a press",
		"name = \"a\"\nkind = \"dial\"\npoints = \"1 psi\"":                                       "is not a list",
	} {
		_, err := ParsePlan([]byte(text))
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s\ngives %v\nwant %s", text, err, want)
		}
	}
	if _, err := builtIn(t, "indicator").For(mill.Setting{}, setting(t, "100 psi")); err == nil {
		t.Error("an indicator has a range in psi")
	}
}

func FuzzAPlanComesBackFromItsText(f *testing.F) {
	for _, name := range PlanNames() {
		text, _ := PlanText(name)
		f.Add(string(text))
	}
	f.Fuzz(func(t *testing.T, text string) {
		p, err := ParsePlan([]byte(text))
		if err != nil {
			return
		}
		again, err := ParsePlan(p.Encode())
		if err != nil || !reflect.DeepEqual(p, again) {
			t.Errorf("%q\n%s\n%v", text, p.Encode(), err)
		}
	})
}

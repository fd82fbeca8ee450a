package mill

import (
	"errors"
	"math"
	"strings"
	"testing"
	"time"
)

// quantity is a quantity that the test knows to be right.
func quantity(t *testing.T, text string) Quantity {
	t.Helper()
	q, err := ParseQuantity(text)
	if err != nil {
		t.Fatal(err)
	}
	return q
}

// Hydraulic cylinder worked checks: 1000 psi on a 4 in bore gives
// 12566.3706143592 lbf, 100 bar on 63 mm gives 31172.4531052447 N (textbook
// formula p x pi d2 / 4, computed with 40-digit arithmetic). T-1's 9.817 in2 is
// the invented mill's.
func TestGeometryArea(t *testing.T) {
	for _, c := range []struct {
		name     string
		t        Tensioner
		pressure string
		pull     float64 // N
		within   float64 // relative
	}{
		{"4 in bore", Tensioner{Cylinders: 1, Bore: Length{quantity(t, "4 in")}}, "1000 psi", 12566.3706143592 * lbfN, 1e-13},
		{"63 mm bore", Tensioner{Cylinders: 1, Bore: Length{quantity(t, "63 mm")}}, "100 bar", 31172.4531052447, 1e-13},
		{"two cylinders", Tensioner{Cylinders: 2, Bore: Length{quantity(t, "2.5 in")}}, "1 psi", 9.817 * lbfN, 1e-4},
		{"a lever of 2", Tensioner{Cylinders: 1, Bore: Length{quantity(t, "4 in")}, TravelRatio: 2}, "1000 psi", 2 * 12566.3706143592 * lbfN, 1e-13},
		{"no cylinders", Tensioner{Bore: Length{quantity(t, "4 in")}}, "1000 psi", 0, 0},
	} {
		c.t.SetBy = SetByPressure
		got := c.t.GeometryAreaM2() * quantity(t, c.pressure).SI
		if math.Abs(got-c.pull) > c.within*c.pull {
			t.Errorf("%s: %.15g N, want %.15g", c.name, got, c.pull)
		}
	}
	screw := Tensioner{SetBy: SetByTorque, Cylinders: 1, Bore: Length{quantity(t, "4 in")}}
	if got := screw.GeometryAreaM2(); got != 0 {
		t.Errorf("a screw has the area %g", got)
	}
}

// Band force worked check: 10,000 psi on 6 in x 0.049 in gives 2940 lbf
// (textbook, computed). QW-6's 0.3045 in2 is the invented mill's.
func TestNetArea(t *testing.T) {
	b := Band{Thickness: Length{quantity(t, "0.049 in")}, NetWidth: Length{quantity(t, "6 in")}}
	if got := quantity(t, "10000 psi").SI * b.NetAreaM2() / lbfN; math.Abs(got/2940-1) > 1e-13 {
		t.Errorf("force is %.15g lbf, want 2940", got)
	}
	qw6 := Band{Thickness: Length{quantity(t, "0.058 in")}, NetWidth: Length{quantity(t, "5.25 in")}}
	if got := qw6.NetAreaM2() / (inchM * inchM); math.Abs(got/0.3045-1) > 1e-13 {
		t.Errorf("area is %.15g in2, want 0.3045", got)
	}
}

func TestSettingFollowsWhatTheTensionerIsSetBy(t *testing.T) {
	for _, c := range []struct {
		by   SetBy
		role Role
		dim  Dim
	}{
		{SetByPressure, RolePressure, DimPressure},
		{SetByTorque, RoleTorque, DimTorque},
		{SetByTurns, RoleTurns, DimAngle},
		{SetBySpring, RoleSpring, DimLength},
	} {
		s := Tensioner{SetBy: c.by}
		if s.SettingRole() != c.role || s.SettingDim() != c.dim {
			t.Errorf("%s: %s and %s", c.by, s.SettingRole(), s.SettingDim())
		}
		if US.Unit(s.SettingRole()).Dim != c.dim || SI.Unit(s.SettingRole()).Dim != c.dim {
			t.Errorf("%s is shown in a unit of another dimension", c.by)
		}
	}
}

func TestFindByName(t *testing.T) {
	p := &Profile{
		Tensioners: []Tensioner{{Name: "T-1"}, {Name: "T-2"}},
		Bands:      []Band{{Name: "QW-6"}},
	}
	if got, err := p.FindTensioner("T-2"); err != nil || got.Name != "T-2" {
		t.Errorf("got %q, %v", got.Name, err)
	}
	if got, err := p.FindBand(""); err != nil || got.Name != "QW-6" {
		t.Errorf("the only band: got %q, %v", got.Name, err)
	}
	for _, name := range []string{"", "t-1", "T-3"} {
		_, err := p.FindTensioner(name)
		if !errors.Is(err, ErrUnknownName) || !strings.Contains(err.Error(), "T-1, T-2") {
			t.Errorf("%q: got %v; want the known names", name, err)
		}
	}
	if _, err := (&Profile{}).FindBand(""); !errors.Is(err, ErrUnknownName) {
		t.Errorf("no bands: got %v", err)
	}
}

func TestFindInstrument(t *testing.T) {
	psi := func(text string) Setting { return Setting{quantity(t, text)} }
	p := &Profile{Instruments: []Instrument{
		{Name: "fine", Serial: "F1", Measures: MeasuresSetting, Limit: psi("1 psi")},
		{Name: "coarse", Serial: "C1", Measures: MeasuresSetting, Limit: psi("10 psi")},
		{Name: "wrench", Measures: MeasuresSetting, Limit: psi("1 lbf ft")},
		{Name: "indicator", Measures: MeasuresExtension},
	}}
	for _, c := range []struct {
		measures string
		dim      Dim
		serial   string
		want     string
	}{
		{MeasuresSetting, DimPressure, "F1", "fine"},
		{MeasuresSetting, DimPressure, "", "coarse"},
		{MeasuresSetting, DimPressure, "X9", "coarse"},
		{MeasuresSetting, DimTorque, "", "wrench"},
		{MeasuresSetting, DimAngle, "", ""},
		{MeasuresExtension, DimLength, "", "indicator"},
	} {
		got, ok := p.FindInstrument(c.measures, c.dim, c.serial)
		if got.Name != c.want || ok != (c.want != "") {
			t.Errorf("%s %s %q: got %q, %v", c.measures, c.dim, c.serial, got.Name, ok)
		}
	}
}

func TestOverdue(t *testing.T) {
	day := time.Date(2027, 3, 31, 12, 0, 0, 0, time.UTC)
	for due, want := range map[string]bool{"2027-03-30": true, "2027-03-31": false, "2027-04-01": false, "": false} {
		if got := (Instrument{Due: due}).OverdueOn(day); got != want {
			t.Errorf("due %q: %v", due, got)
		}
	}
}

package mill

import (
	"math"
	"strings"
	"testing"
)

func pascals(v float64) Setting {
	return Setting{Quantity{SI: v, Entered: "given", Unit: units()[6]}}
}

func benchOf(points ...[4]float64) *Bench {
	b := &Bench{}
	for _, p := range points {
		b.Points = append(b.Points, BenchPoint{pascals(p[0]), pascals(p[1]), pascals(p[2]), pascals(p[3])})
	}
	return b
}

// Expected values follow from the rule in the comment of CorrectionAt.
func TestACorrectionLiesOnStraightLinesBetweenThePoints(t *testing.T) {
	b := benchOf([4]float64{0, 1, 3, 2}, [4]float64{10, 2, 4, 4}, [4]float64{20, 7, 7, 4})
	bend := (7.0-1)/2 - (2 - 1) // how far the middle point lies off the chord of the others
	for _, c := range []struct {
		at       float64
		from     Approach
		add, std float64
		outside  bool
	}{
		{0, FromBelow, 1, 1, false},
		{0, FromAbove, 3, 1, false},
		{0, FromEither, 2, math.Hypot(1, 1/math.Sqrt(3)), false},
		{5, FromBelow, 1.5, math.Hypot(1.5, bend/4/math.Sqrt(3)), false},
		{15, FromAbove, 5.5, math.Hypot(2, (5-4.0)/4/math.Sqrt(3)), false},
		{20, FromBelow, 7, 2, false},
		{25, FromBelow, 7, 4, true},
		{-1, FromAbove, 3, 2, true},
	} {
		got, ok := b.CorrectionAt(c.at, c.from)
		if !ok || math.Abs(got.Add-c.add) > 1e-12 || math.Abs(got.Std-c.std) > 1e-12 || got.Outside != c.outside {
			t.Errorf("at %v from %v: %+v %v, want %+v", c.at, c.from, got, ok, c)
		}
	}
	var none *Bench
	if _, ok := none.CorrectionAt(1, FromBelow); ok {
		t.Error("a correction out of nothing")
	}
	if c, _ := b.CorrectionAt(math.NaN(), FromBelow); math.IsNaN(c.Std) {
		t.Error("no doubt about what is not a number")
	}
}

func TestABenchRecordIsReadAndItsFaultsAreNamed(t *testing.T) {
	p, err := Parse(Example())
	if err != nil {
		t.Fatal(err)
	}
	i, ok := p.FindInstrument(MeasuresReference, DimPressure, "QF-R-0031")
	if !ok || i.Bench == nil || len(i.Bench.Points) != 2 || i.Bench.Points[1].Rising.Entered != "-0.2 psi" {
		t.Fatalf("%+v", i)
	}
	for _, c := range []struct{ old, new, says string }{
		{`checked = "2026-03-02"`, `checked = "spring"`, "bench.checked: \"spring\" is not a date"},
		{`verdict = "pass"`, `verdict = "fine"`, "instrument.bench.verdict"},
		{`at = "1500 psi"`, `at = "0 psi"`, "does not rise above"},
		{`at = "1500 psi"`, `at = "15 mm"`, "instrument.bench.point.at"},
		{`uncertainty = "0.4 psi"`, ``, "instrument.bench.point.uncertainty: missing"},
		{`range_high = "1500 psi"`, `range_high = "-1500 psi"`, "range_high"},
	} {
		_, err := Parse([]byte(strings.Replace(string(Example()), c.old, c.new, 1)))
		if err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v, want %s", c.new, err, c.says)
		}
	}
}

func TestAGaugeLimitNeedsItsSource(t *testing.T) {
	p, err := Parse(Example())
	if err != nil {
		t.Fatal(err)
	}
	if l := p.GaugeLimits; len(l) != 2 || l[0].ErrorShare != [3]float64{0.01, 0.01, 0.01} || math.Abs(l[1].Error.SI-3e-6) > 1e-18 {
		t.Errorf("%+v", l)
	}
	three := strings.Replace(string(Example()), "error_percent = 1.0", "error_percent = [3, 2, 3]", 1)
	if p, err = Parse([]byte(three)); err != nil || p.GaugeLimits[0].ErrorShare != [3]float64{0.03, 0.02, 0.03} {
		t.Error(p, err)
	}
	for _, c := range []struct{ old, new, says string }{
		{`source = "invented example"`, ``, "gauge_limit.source: missing"},
		{`error_percent = 1.0`, `error_percent = [1, 2]`, "2 numbers"},
		{`error_percent = 1.0`, `error = "1 psi"` + "\nerror_percent = 1.0", "one limit of error"},
		{`name = "shop indicator"`, `name = "shop gauge"`, "stands twice"},
	} {
		_, err := Parse([]byte(strings.Replace(string(Example()), c.old, c.new, 1)))
		if err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v, want %s", c.new, err, c.says)
		}
	}
}

func TestADialIsReadInItsOwnUnit(t *testing.T) {
	psi := Tensioner{Name: "T-1", SetBy: SetByPressure, Dial: &DialFace{Unit: "psi", Graduation: 20}}
	bare := Tensioner{Name: "T-3", SetBy: SetByPressure, Dial: &DialFace{Unit: Divisions, Graduation: 1}}
	none := Tensioner{Name: "T-4", SetBy: SetByPressure}
	for _, c := range []struct {
		of   Tensioner
		text string
		want DialReading
	}{
		{psi, "600", DialReading{600, "psi"}},
		{psi, " 600 PSI ", DialReading{600, "psi"}},
		{bare, "12.5 div", DialReading{12.5, Divisions}},
		{bare, "12 1/2", DialReading{12.5, Divisions}},
		{none, "40 kgf/cm²", DialReading{40, "kgf/cm2"}},
		{none, "40 divisions", DialReading{40, Divisions}},
	} {
		if got, err := c.of.ParseDialReading(c.text); err != nil || got != c.want {
			t.Errorf("%s: %+v %v", c.text, got, err)
		}
	}
	for _, c := range []struct {
		of   Tensioner
		text string
	}{{psi, "40 bar"}, {psi, "40 mm"}, {psi, "high"}, {none, "600"}, {psi, ""}, {bare, "12 psi"}} {
		if got, err := c.of.ParseDialReading(c.text); err == nil {
			t.Errorf("%q is read as %+v", c.text, got)
		}
	}
}

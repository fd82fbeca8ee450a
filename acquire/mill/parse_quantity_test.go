package mill

import (
	"errors"
	"math"
	"strings"
	"testing"
)

func TestParseQuantityReadsWhatSawyersWrite(t *testing.T) {
	for _, c := range []struct {
		text string
		unit string
		want float64 // in unit
	}{
		{"5.25 in", "in", 5.25},
		{"5 1/4 in", "in", 5.25},
		{"5-1/4 in", "in", 5.25},
		{"1/4 in", "in", 0.25},
		{"1/16in", "in", 0.0625},
		{"9/8 in", "in", 1.125},
		{`5 1/4"`, "in", 5.25},
		{"1 1/2 turns", "turn", 1.5},
		{"5\u00bc in", "in", 5.25},
		{"5 \u00bd in", "in", 5.5},
		{"\u215e\"", "in", 0.875},
		{"-1\u00be in", "in", -1.75},
		{"133 mm", "mm", 133},
		{"133mm", "mm", 133},
		{"\t133  mm ", "mm", 133},
		{".058 in", "in", 0.058},
		{"29.0 Mpsi", "Mpsi", 29},
		{"29e6 psi", "psi", 29e6},
		{"2.9E+07 psi", "psi", 29e6},
		{"+950 psi", "psi", 950},
		{"-1.5 mm", "mm", -1.5},
		{"-1/4 in", "in", -0.25},
		{"0 lbf", "lbf", 0},
		{"40 lbf ft", "lbf ft", 40},
		{"54 N.m", "N m", 54},
		{"54 Nm", "N m", 54},
		{"7 kgf/cm2", "kgf/cm2", 7},
		{"65.5 MPa", "MPa", 65.5},
		{"90\u00b0", "deg", 90},
	} {
		q, err := ParseQuantity(c.text)
		if err != nil {
			t.Errorf("%q: %v", c.text, err)
			continue
		}
		want := unitOf(t, c.unit)
		if q.Unit != want || q.SI != want.ToSI(c.want) {
			t.Errorf("%q: got %+v, want %g %s", c.text, q, c.want, c.unit)
		}
		if q.String() != strings.TrimSpace(c.text) || !q.Given() {
			t.Errorf("%q is given back as %q", c.text, q)
		}
		if again, err := ParseQuantity(q.String()); err != nil || again != q {
			t.Errorf("%q read again gives %+v, %v", c.text, again, err)
		}
	}
}

func TestParseQuantityRefuses(t *testing.T) {
	length, setting := []Dim{DimLength}, []Dim{DimPressure, DimTorque}
	for _, c := range []struct {
		name, text string
		dims       []Dim
		problem    string
		hint       string
	}{
		{"nothing", "", length, "nothing given", "mm"},
		{"blank", " \t", length, "nothing given", "mm"},
		{"bare number", "5.25", length, "no unit", "m, cm, mm, um, in, ft"},
		{"bare fraction", "5 1/4", length, "no unit", "in"},
		{"unknown unit", "5.25 furlong", length, `unknown unit "furlong"`, "m, cm, mm, um, in, ft"},
		{"unit in the wrong case", "65 mpa", setting, `unknown unit "mpa"`, "MPa"},
		{"wrong dimension", "5 mm", setting, "mm is a unit of length, not of pressure or torque", "psi"},
		{"unit alone", "mm", length, "not a number", "5.25 in"},
		{"decimal comma", "5,25 in", length, "not a number", "point"},
		{"thousands", "9,500 psi", setting, "not a number", "no commas"},
		{"two numbers", "5 25 in", length, "not a number", "5 1/4 in"},
		{"two points", "5.2.5 in", length, "not a number", "5 1/4 in"},
		{"not a number", "NaN in", length, "not a number", "5.25 in"},
		{"infinite", "inf in", length, "not a number", "5.25 in"},
		{"signed infinity", "+Inf in", length, "not a number", "5.25 in"},
		{"hexadecimal", "0x10 in", length, "unknown unit", "mm"},
		{"underscore", "1_000 psi", setting, "unknown unit", "psi"},
		{"a subtraction", "5 - 1/4 in", length, "not a number", "5 1/4 in"},
		{"fraction after a fraction", "1/4\u00bc in", length, "not a number", "5 1/4 in"},
		{"by zero", "5 1/0 in", length, "not a number", "5 1/4 in"},
		{"improper with whole", "5 9/8 in", length, "not a number", "5 1/4 in"},
		{"fraction of fractions", "1/2/3 in", length, "not a number", "5 1/4 in"},
		{"fraction of decimals", "1.5/2 in", length, "not a number", "5 1/4 in"},
		{"double sign", "--1/4 in", length, "not a number", "5 1/4 in"},
		{"exponent too large", "1e999 in", length, "not a number", "5 1/4 in"},
		{"huge", "1e30 in", length, "far too large", "check the number"},
		{"huge digits", strings.Repeat("9", 400) + " in", length, "not a number", "5.25 in"},
		{"vanishing", "1e-300 in", length, "far too small", "check the number"},
		{"vanishing in SI", "1e-322 um", length, "far too small", "check the number"},
		{"unit twice", "5 in in", length, `unknown unit "in in"`, "in"},
		{"percent", "5 %", length, "unknown unit", "in"},
		{"zero byte", "5\x00 in", length, "unknown unit", "in"},
	} {
		t.Run(c.name, func(t *testing.T) {
			q, err := ParseQuantity(c.text, c.dims...)
			var bad *QuantityError
			if !errors.As(err, &bad) {
				t.Fatalf("got %+v, %v", q, err)
			}
			if !strings.Contains(bad.Problem, c.problem) || !strings.Contains(bad.Hint, c.hint) {
				t.Errorf("problem %q, hint %q; want %q and %q in them", bad.Problem, bad.Hint, c.problem, c.hint)
			}
			if q != (Quantity{}) {
				t.Errorf("refused, but gave %+v", q)
			}
		})
	}
}

func FuzzParseQuantity(f *testing.F) {
	for _, s := range []string{"5.25 in", "5 1/4 in", "-1-1/4\"", "1e5 psi", "1/0 in", "e5 e5", "5e", "\u00b5m", "1 / 2 mm"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		q, err := ParseQuantity(text)
		if err != nil {
			return
		}
		if math.IsNaN(q.SI) || math.IsInf(q.SI, 0) || math.Abs(q.SI) > largest(q.Unit.Dim) {
			t.Errorf("%q gave %g", text, q.SI)
		}
		if again, err := ParseQuantity(q.String()); err != nil || again != q {
			t.Errorf("%q read again gives %+v, %v, not %+v", text, again, err, q)
		}
	})
}

package report

import (
	"math"
	"testing"

	"tautramp/analyze/estimate"
)

// Source: JCGM 100:2008, 7.2.6: uncertainties to at most two significant
// digits, estimates rounded to match; its own examples, from memory, are
// y = 10.057 62 ohm with u = 27 milliohm, rounded to 10.058 ohm, and
// u = 28.05 kHz, rounded down to 28 kHz; 7.2.2 prints 100.021 47 g with 0.35 mg
// (from memory too).
func TestRoundingFollowsTheGuide(t *testing.T) {
	for _, c := range []struct {
		name        string
		value, u    float64
		wantV, want string
	}{
		{"the guide's resistor", 10.05762, 0.027, "10.058", "0.027"},
		{"the guide's frequency", 1234.56, 28.05, "1235", "28"},
		{"the guide's mass, g", 100.02147, 0.35e-3, "100.02147", "0.00035"},
		{"a rounding that carries", 1.23456, 0.0996, "1.23", "0.10"},
		{"left of the point", 9512.3, 643, "9510", "640"},
		{"a carry left of the point", 9512.3, 996, "9500", "1000"},
		{"below zero", -0.000123456, 0.0000021, "-0.0001235", "0.0000021"},
		{"never a negative zero", -0.001, 0.12, "0.00", "0.12"},
	} {
		d := uncertaintyDecimals(c.u)
		if v, u := fixed(c.value, d), fixed(c.u, d); v != c.wantV || u != c.want {
			t.Errorf("%s: %s +/- %s, want %s +/- %s", c.name, v, u, c.wantV, c.want)
		}
	}
}

func TestNumbersAreGroupedAndPlain(t *testing.T) {
	for in, want := range map[string]string{"9500": "9,500", "-1594": "-1,594", "1234567.891": "1,234,567.891", "724": "724", "0.5": "0.5"} {
		if got := grouped(in); got != want {
			t.Errorf("grouped(%s) = %s, want %s", in, got, want)
		}
	}
	for _, c := range []struct {
		x      float64
		digits int
		want   string
	}{{0.058, 4, "0.058"}, {9500.0000001, 4, "9,500"}, {0, 3, "0"}, {65.50019, 4, "65.5"}, {3.937e-5, 3, "0.0000394"}, {99999, 3, "100,000"}, {math.NaN(), 3, "not known"}, {math.Inf(1), 3, "not known"}} {
		if got := plain(c.x, c.digits); got != c.want {
			t.Errorf("plain(%g, %d) = %s, want %s", c.x, c.digits, got, c.want)
		}
	}
}

func TestFiguresSayWhatIsMissing(t *testing.T) {
	u := unit{"gauge psi", 1}
	known := func(v, r, s, dof float64) estimate.Estimate {
		return estimate.Estimate{Value: v, Random: r, System: s, DoF: dof, Method: "m"}
	}
	for _, c := range []struct {
		name string
		e    estimate.Estimate
		want string
	}{
		{"known well", known(724.06, 0, 25, math.Inf(1)), "724 +/- 49 gauge psi"}, // 1.96 x 25
		{"not known", estimate.Unknown("no zero"), "not known: no zero"},
		{"zero value", estimate.Estimate{}, "not known: no reason was given"},
		{"not a number", known(math.NaN(), 1, 1, 3), "not known: the computation gave no finite number"},
		{"infinite", known(math.Inf(1), 1, 1, 3), "not known: the computation gave no finite number"},
		{"no interval", known(724.06, 1, 0, 0), "724.1 gauge psi (interval not known)"},
	} {
		if got := figureOf(c.e, u).String(); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

func TestRoundStepsAreOneTwoFive(t *testing.T) {
	for _, c := range []struct {
		span     float64
		rows     int
		step     float64
		decimals int
	}{{740, 16, 50, 0}, {740, 12, 100, 0}, {51, 12, 5, 0}, {1, 8, 0.2, 1}, {0.037, 8, 0.005, 3}, {0.7, 12, 0.1, 1}, {12345, 8, 2000, 0}} {
		if step, decimals := roundStep(c.span, c.rows); step != c.step || decimals != c.decimals {
			t.Errorf("roundStep(%g, %d) = %g, %d; want %g, %d", c.span, c.rows, step, decimals, c.step, c.decimals)
		}
	}
}

func TestTextFromOutsideIsCleaned(t *testing.T) {
	for in, want := range map[string]string{
		"  T-1\t\n two ":         "T-1 two",
		"a\x00b\x1b[31mc\x7f":    "ab[31mc",
		"\u202Egnp.exe\u200B":    "gnp.exe",
		"bad \xff byte":          "bad \uFFFD byte",
		"0123456789012345678901": "01234567890123456...",
	} {
		if got := clean(in, 20); got != want {
			t.Errorf("clean(%q) = %q, want %q", in, got, want)
		}
	}
}

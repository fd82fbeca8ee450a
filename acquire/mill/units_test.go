package mill

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The exact definitions of inch, pound, standard gravity and bar give every
// factor; the digits were computed with exact rational arithmetic and agree with
// a published table of constants to 14 digits. NIST SP 811 Appendix B prints
// 6.894 757 E+03 Pa for the psi and 4.448 222 E+00 N for the lbf (from memory).
func TestFactorsAreTheDefinedOnes(t *testing.T) {
	for name, want := range map[string]float64{
		"in":      0.0254,                // exact, international inch
		"ft":      0.3048,                // exact
		"mm":      0.001,                 // exact, SI
		"cm":      0.01,                  // exact, SI
		"um":      1e-6,                  // exact, SI
		"psi":     6894.7572931683613367, // derived from lbf and inch
		"ksi":     6.894757293168361e6,   // derived
		"Mpsi":    6.894757293168361e9,   // derived
		"bar":     1e5,                   // exact
		"kgf/cm2": 98066.5,               // exact
		"kPa":     1e3,                   // exact, SI
		"MPa":     1e6,                   // exact, SI
		"GPa":     1e9,                   // exact, SI
		"lbf":     4.4482216152605,       // exact, 0.45359237 kg x 9.80665 m/s2
		"kgf":     9.80665,               // exact
		"kN":      1e3,                   // exact, SI
		"lbf in":  0.1129848290276167,    // exact to these digits
		"lbf ft":  1.3558179483314,       // exact to these digits
		"lbf/in":  175.1268352464764,     // derived from lbf and inch
		"kN/mm":   1e6,                   // exact, SI
		"N/mm":    1e3,                   // exact, SI
		"turn":    2 * math.Pi,
		"deg":     math.Pi / 180,
	} {
		u, ok := findUnit(name)
		if !ok {
			t.Errorf("no unit %s", name)
			continue
		}
		if off := math.Abs(u.SI/want - 1); off > 1e-14 {
			t.Errorf("1 %s is %.17g, want %.17g (off by %.2g)", name, u.SI, want, off)
		}
	}
}

// Derived conversions of the same table.
func TestConversionsBetweenSystems(t *testing.T) {
	for _, c := range []struct {
		from, to string
		want     float64
	}{
		{"MPa", "psi", 145.0377377302092},
		{"bar", "psi", 14.50377377302092},
		{"N", "lbf", 0.2248089430997105},
		{"ksi", "MPa", 6.894757293168361},
		{"Mpsi", "GPa", 6.894757293168361},
	} {
		from, to := unitOf(t, c.from), unitOf(t, c.to)
		if got := to.FromSI(from.ToSI(1)); math.Abs(got/c.want-1) > 1e-14 {
			t.Errorf("1 %s is %.17g %s, want %.17g", c.from, got, c.to, c.want)
		}
	}
}

// There and back must give the value again within 2 units in the last place.
func TestRoundTripWithinTwoUlp(t *testing.T) {
	rng := rand.New(rand.NewPCG(20, 26))
	for _, pair := range [][2]string{
		{"psi", "MPa"}, {"psi", "bar"}, {"psi", "kgf/cm2"}, {"Mpsi", "GPa"}, {"in", "mm"},
		{"in", "um"}, {"ft", "m"}, {"lbf", "kN"}, {"lbf ft", "N m"}, {"turn", "deg"},
	} {
		a, b := unitOf(t, pair[0]), unitOf(t, pair[1])
		for range 20000 {
			x := math.Exp(rng.Float64()*30 - 10)
			there := b.FromSI(a.ToSI(x))
			back := a.FromSI(b.ToSI(there))
			if off := ulps(x, back); off > 2 {
				t.Fatalf("%s to %s and back: %.17g became %.17g, %d ulp off", pair[0], pair[1], x, back, off)
			}
		}
	}
}

// ulps counts the float64 values from a to b, both above zero.
func ulps(a, b float64) int64 {
	d := int64(math.Float64bits(a)) - int64(math.Float64bits(b))
	return max(d, -d)
}

func unitOf(t *testing.T, name string) Unit {
	t.Helper()
	u, ok := findUnit(name)
	if !ok {
		t.Fatalf("no unit %s", name)
	}
	return u
}

func TestUnitsByTheNamesThatPeopleWrite(t *testing.T) {
	for _, u := range units() {
		if got, ok := findUnit(u.Name); !ok || got != u {
			t.Errorf("%s is found as %+v", u.Name, got)
		}
	}
	for written, want := range map[string]string{
		"N.m": "N m", "Nm": "N m", "N\u00b7m": "N m", "N*m": "N m",
		"lbf.ft": "lbf ft", "ft-lb": "lbf ft", "ft lbf": "lbf ft", "ft\u00b7lbf": "lbf ft",
		"lbf in": "lbf in", "in-lb": "lbf in", "lbf.in": "lbf in", "in lbs": "lbf in",
		"inch": "in", "inches": "in", `"`: "in", "feet": "ft", "\u00b5m": "um", "\u03bcm": "um",
		"lb": "lbf", "lbs": "lbf", "lb/in": "lbf/in", "PSI": "psi", "psig": "psi", "kgf/cm\u00b2": "kgf/cm2",
		"turns": "turn", "degrees": "deg", "\u00b0": "deg",
	} {
		if got, ok := findUnit(written); !ok || got.Name != want {
			t.Errorf("%q is found as %q, want %q", written, got.Name, want)
		}
	}
	for _, wrong := range []string{"", "mpa", "Mm", "PA", "psia", "n", "NM", "kg", "ftlb", "mN", "furlong"} {
		if got, ok := findUnit(wrong); ok {
			t.Errorf("%q is taken for %q", wrong, got.Name)
		}
	}
}

func TestSystemsShowEachRoleInItsUnit(t *testing.T) {
	for _, c := range []struct {
		role   Role
		us, si string
	}{
		{RoleStress, "psi", "MPa"},
		{RolePressure, "psi", "bar"},
		{RoleTorque, "lbf ft", "N m"},
		{RoleTurns, "turn", "turn"},
		{RoleSpring, "in", "mm"},
		{RoleExtension, "in", "mm"},
		{RoleSection, "in", "mm"},
		{RoleForce, "lbf", "kN"},
		{RoleStiffness, "lbf/in", "kN/mm"},
	} {
		if us, si := US.Unit(c.role).Name, SI.Unit(c.role).Name; us != c.us || si != c.si {
			t.Errorf("%s: %q and %q, want %q and %q", c.role, us, si, c.us, c.si)
		}
	}
	if u := US.Unit("mood"); u != (Unit{}) {
		t.Errorf("an unknown role has the unit %+v", u)
	}
}

func TestParseSystem(t *testing.T) {
	for text, want := range map[string]System{"us": US, "SI": SI, " si ": SI} {
		if got, err := ParseSystem(text); got != want || err != nil {
			t.Errorf("%q: got %q, %v", text, got, err)
		}
	}
	for _, text := range []string{"", "metric", "u s"} {
		if got, err := ParseSystem(text); err == nil {
			t.Errorf("%q is taken for %q", text, got)
		}
	}
}

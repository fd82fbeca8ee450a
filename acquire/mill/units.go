package mill

import (
	"math"
	"strings"
)

// Exact by definition: the international inch and pound (1959 agreement), the
// standard acceleration of gravity (3rd CGPM, 1901), and the bar.
const (
	inchM   = 0.0254
	footM   = 12 * inchM
	poundKg = 0.45359237
	gravity = 9.80665 // m/s2
	lbfN    = poundKg * gravity
	psiPa   = lbfN / (inchM * inchM)
	barPa   = 1e5
	kgfCm2  = gravity / 1e-4
)

// units is the table of units by the name that is printed; the first of a
// dimension is its SI unit. Constant arithmetic is exact, so each factor is the
// nearest float64 to the defined one.
func units() []Unit {
	return []Unit{
		{"m", DimLength, 1},
		{"cm", DimLength, 0.01},
		{"mm", DimLength, 1e-3},
		{"um", DimLength, 1e-6},
		{"in", DimLength, inchM},
		{"ft", DimLength, footM},
		{"Pa", DimPressure, 1},
		{"kPa", DimPressure, 1e3},
		{"MPa", DimPressure, 1e6},
		{"GPa", DimPressure, 1e9},
		{"bar", DimPressure, barPa},
		{"kgf/cm2", DimPressure, kgfCm2},
		{"psi", DimPressure, psiPa},
		{"ksi", DimPressure, 1e3 * psiPa},
		{"Mpsi", DimPressure, 1e6 * psiPa},
		{"N", DimForce, 1},
		{"kN", DimForce, 1e3},
		{"kgf", DimForce, gravity},
		{"lbf", DimForce, lbfN},
		{"N m", DimTorque, 1},
		{"lbf ft", DimTorque, lbfN * footM},
		{"lbf in", DimTorque, lbfN * inchM},
		{"rad", DimAngle, 1},
		{"deg", DimAngle, math.Pi / 180},
		{"turn", DimAngle, 2 * math.Pi},
		{"K", DimWarmth, 1},
		{"degC", DimWarmth, 1},
		{"degF", DimWarmth, 5.0 / 9},
		{"N/m", DimStiffness, 1},
		{"N/mm", DimStiffness, 1e3},
		{"kN/mm", DimStiffness, 1e6},
		{"lbf/in", DimStiffness, lbfN / inchM},
		{"m3", DimVolume, 1},
		{"L", DimVolume, 1e-3},
		{"mL", DimVolume, 1e-6},
		{"in3", DimVolume, inchM * inchM * inchM},
	}
}

// alias gives the printed name of a unit for the other ways in which people
// write it. Case is kept: it is all that tells mega from milli.
func alias(name string) string {
	switch strings.Join(strings.FieldsFunc(name, isJoint), " ") {
	case "inch", "inches", `"`, "\u2033":
		return "in"
	case "foot", "feet":
		return "ft"
	case "\u00b5m", "\u03bcm": // micro sign, Greek mu
		return "um"
	case "PSI", "psig":
		return "psi"
	case "kgf/cm\u00b2":
		return "kgf/cm2"
	case "lb", "lbs":
		return "lbf"
	case "N m", "Nm":
		return "N m"
	case "lbf ft", "ft lbf", "lb ft", "ft lb", "ft lbs":
		return "lbf ft"
	case "lbf in", "in lbf", "lb in", "in lb", "in lbs":
		return "lbf in"
	case "l", "liter", "litre", "liters", "litres", "dm3":
		return "L"
	case "ml", "cm3", "cc":
		return "mL"
	case "cu in", "in\u00b3":
		return "in3"
	case "lb/in", "lbs/in":
		return "lbf/in"
	case "degree", "degrees", "\u00b0":
		return "deg"
	case "turns", "rev":
		return "turn"
	}
	return name
}

// isJoint tells what may stand between the two factors of a torque unit.
func isJoint(r rune) bool {
	return r == ' ' || r == '.' || r == '-' || r == '*' || r == '\u00b7'
}

// findUnit looks a unit up as people write it.
func findUnit(name string) (Unit, bool) {
	name = alias(name)
	for _, u := range units() {
		if u.Name == name {
			return u, true
		}
	}
	return Unit{}, false
}

// unitNames lists the units of the dimensions, for a hint.
func unitNames(dims []Dim) string {
	var names []string
	for _, u := range units() {
		if fits(u.Dim, dims) {
			names = append(names, u.Name)
		}
	}
	return strings.Join(names, ", ")
}

// ToSI converts a value in u to the SI unit of its dimension.
func (u Unit) ToSI(value float64) float64 { return value * u.SI }

// FromSI converts a value in the SI unit of u's dimension to u.
func (u Unit) FromSI(si float64) float64 { return si / u.SI }

// Unit is the unit in which the system shows a role. An unknown role gives the
// zero Unit.
func (s System) Unit(r Role) Unit {
	us, si := displayNames(r)
	name := us
	if s == SI {
		name = si
	}
	u, _ := findUnit(name)
	return u
}

// displayNames are the units of a role in the two systems.
func displayNames(r Role) (us, si string) {
	switch r {
	case RoleStress:
		return "psi", "MPa"
	case RolePressure:
		return "psi", "bar"
	case RoleTorque:
		return "lbf ft", "N m"
	case RoleTurns:
		return "turn", "turn"
	case RoleSpring, RoleExtension, RoleSection:
		return "in", "mm"
	case RoleForce:
		return "lbf", "kN"
	case RoleStiffness:
		return "lbf/in", "kN/mm"
	}
	return "", ""
}

// ParseSystem reads "us" or "si".
func ParseSystem(text string) (System, error) {
	switch s := System(strings.ToLower(strings.TrimSpace(text))); s {
	case US, SI:
		return s, nil
	}
	return "", &QuantityError{Text: text, Problem: "no system of units", Hint: "write us or si"}
}

package protocol

import "math"

// Unit is one row of the unit table: a value v in Code is v*SI + Offset in the
// quantity's SI unit (SPEC 6.2).
type Unit struct {
	Code     string // UCUM, case-sensitive
	Quantity Quantity
	SI       float64 // SI units in one unit
	Offset   float64 // SI value at zero; only temperatures have one
}

// Units is the table of SPEC 6.2: pressure in Pa, extension and spring in m,
// force in N, torque in N.m, angle in rad, temperature in K, voltage in V. The
// caller owns the slice.
func Units() []Unit {
	table := units()
	return table[:]
}

// The factors follow from the exact definitions of the inch (0.0254 m), the
// avoirdupois pound (0.45359237 kg) and standard gravity (9.80665 m/s2): NIST
// SP 811 (2008), appendix B.
const (
	inchM  = 0.0254
	lbfN   = 0.45359237 * 9.80665
	psiPa  = lbfN / (inchM * inchM)
	degFK  = 5.0 / 9
	footM  = 12 * inchM
	turn   = 2 * math.Pi
	iceK   = 273.15
	zeroFK = 459.67 * 5 / 9
)

func units() [28]Unit {
	return [...]Unit{
		{"[psi]", Pressure, psiPa, 0},
		{"Pa", Pressure, 1, 0},
		{"kPa", Pressure, 1e3, 0},
		{"MPa", Pressure, 1e6, 0},
		{"bar", Pressure, 1e5, 0},
		{"mbar", Pressure, 100, 0},
		{"[in_i]", Extension, inchM, 0},
		{"mm", Extension, 1e-3, 0},
		{"um", Extension, 1e-6, 0},
		{"m", Extension, 1, 0},
		{"N", Force, 1, 0},
		{"kN", Force, 1e3, 0},
		{"[lbf_av]", Force, lbfN, 0},
		{"kgf", Force, 9.80665, 0},
		{"N.m", Torque, 1, 0},
		{"[ft_i].[lbf_av]", Torque, footM * lbfN, 0},
		{"[in_i].[lbf_av]", Torque, inchM * lbfN, 0},
		{"circ", Angle, turn, 0},
		{"deg", Angle, math.Pi / 180, 0},
		{"rad", Angle, 1, 0},
		{"[in_i]", Spring, inchM, 0},
		{"mm", Spring, 1e-3, 0},
		{"m", Spring, 1, 0},
		{"Cel", Temperature, 1, iceK},
		{"[degF]", Temperature, degFK, zeroFK},
		{"K", Temperature, 1, 0},
		{"V", Voltage, 1, 0},
		{"mV", Voltage, 1e-3, 0},
	}
}

// ToSI is the SI value of a count (SPEC 6.3), or NaN when the channel's unit is
// not in the table, which Parse never lets through. The scale rounds once, the
// factor once.
func ToSI(c Chan, count int32) float64 {
	u, ok := unitOf(c)
	if !ok {
		return math.NaN()
	}
	return scaled(c, int64(count)-int64(c.ZeroCount))*u.SI + u.Offset
}

// LeastSI is the width of one least count in the quantity's SI unit, always
// positive; NaN as for ToSI. A temperature's is a difference, in K.
func LeastSI(c Chan) float64 {
	u, ok := unitOf(c)
	if !ok {
		return math.NaN()
	}
	return math.Abs(scaled(c, int64(c.Res)) * u.SI)
}

func unitOf(c Chan) (Unit, bool) {
	table := units()
	for i := range table {
		if u := &table[i]; u.Code == c.Unit && u.Quantity == c.Quantity {
			return *u, true
		}
	}
	return Unit{}, false
}

// scaled is counts*mantissa*10^exponent, rounded once: the product of the whole
// numbers is below 2^53 for every channel that Parse lets through, and so is
// the power of ten, so a negative exponent divides two exact numbers.
func scaled(c Chan, counts int64) float64 {
	power := 1.0
	for range max(c.Exponent, -c.Exponent) {
		power *= 10
	}
	whole := float64(counts * int64(c.Mantissa))
	if c.Exponent < 0 {
		return whole / power
	}
	return whole * power
}

package mill

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// QuantityError is a quantity that cannot be what was meant.
type QuantityError struct {
	Text    string // as written
	Problem string // what is wrong with it
	Hint    string // what to write instead
}

func (e *QuantityError) Error() string {
	return fmt.Sprintf("%q: %s; %s", e.Text, e.Problem, e.Hint)
}

// ParseQuantity reads a number with a unit, such as "5.25 in", "5 1/4 in" or
// "133 mm", of one of the dimensions; without dimensions any will do. The error
// is a *QuantityError.
func ParseQuantity(text string, dims ...Dim) (Quantity, error) {
	entered := strings.TrimSpace(text)
	refuse := func(problem, hint string) (Quantity, error) {
		return Quantity{}, &QuantityError{Text: text, Problem: problem, Hint: hint}
	}
	if entered == "" {
		return refuse("nothing given", "write a number and its unit: "+unitNames(dims))
	}
	number, unitName := splitUnit(plainFractions(entered))
	value, ok := parseNumber(number)
	if !ok {
		return refuse("not a number", numberHint(number))
	}
	if unitName == "" {
		return refuse("no unit", fmt.Sprintf("write the unit after the number: %s", unitNames(dims)))
	}
	unit, ok := findUnit(unitName)
	if !ok {
		return refuse(fmt.Sprintf("unknown unit %q", unitName), "known here: "+unitNames(dims))
	}
	if !fits(unit.Dim, dims) {
		return refuse(fmt.Sprintf("%s is a unit of %s, not of %s", unit.Name, unit.Dim, dimNames(dims)),
			"known here: "+unitNames(dims))
	}
	si := unit.ToSI(value)
	if math.Abs(si) > largest(unit.Dim) {
		return refuse("far too large to be real", "check the number and its unit")
	}
	if si == 0 && value != 0 || si != 0 && math.Abs(si) < leastSI {
		return refuse("far too small to be real", "check the number and its unit")
	}
	return Quantity{SI: si, Entered: entered, Unit: unit}, nil
}

// plainFractions writes out the fractions that are one character each.
func plainFractions(text string) string {
	var b strings.Builder
	last := ' '
	for _, r := range text {
		if plain := plainFraction(r); plain != "" {
			if last >= '0' && last <= '9' {
				b.WriteByte(' ')
			}
			b.WriteString(plain)
		} else {
			b.WriteRune(r)
		}
		last = r
	}
	return b.String()
}

// plainFraction is the fraction that a character stands for, "" for any other;
// the fraction slash is a slash.
func plainFraction(r rune) string {
	switch r {
	case '\u00bc':
		return "1/4"
	case '\u00bd':
		return "1/2"
	case '\u00be':
		return "3/4"
	case '\u2153':
		return "1/3"
	case '\u2154':
		return "2/3"
	case '\u215b':
		return "1/8"
	case '\u215c':
		return "3/8"
	case '\u215d':
		return "5/8"
	case '\u215e':
		return "7/8"
	}
	return ""
}

// splitUnit cuts behind the last character that can belong to a number: a unit
// starts with the first letter or quote mark, except the e of an exponent.
func splitUnit(text string) (number, unit string) {
	for i, r := range text {
		if strings.ContainsRune("0123456789.,+-/ \t", r) || isExponent(text, i) {
			continue
		}
		return strings.TrimSpace(text[:i]), text[i:]
	}
	return text, ""
}

// isExponent tells whether the letter at i is the e between a digit and an
// exponent.
func isExponent(text string, i int) bool {
	if text[i] != 'e' && text[i] != 'E' || i == 0 || !isDigit(text[i-1]) {
		return false
	}
	rest := strings.TrimLeft(text[i+1:], "+-")
	return rest != "" && isDigit(rest[0])
}

func isDigit(c byte) bool { return c >= '0' && c <= '9' }

// parseNumber reads a decimal number, or an inch fraction: "1/4", "5 1/4",
// "5-1/4", with a sign before it.
func parseNumber(text string) (float64, bool) {
	num, den, isFraction := strings.Cut(text, "/")
	if !isFraction {
		return parseDecimal(text)
	}
	sign := 1.0
	if unsigned, negative := strings.CutPrefix(num, "-"); negative {
		sign, num = -1, unsigned
	}
	whole := 0.0
	if i := strings.LastIndexAny(num, " \t-"); i >= 0 {
		n, ok := parseDigits(strings.TrimRight(num[:i], " \t"))
		if !ok {
			return 0, false
		}
		whole, num = n, num[i+1:]
	}
	n, okN := parseDigits(num)
	d, okD := parseDigits(den)
	if !okN || !okD || d == 0 || whole != 0 && n >= d {
		return 0, false
	}
	return sign * (whole + n/d), true
}

// parseDecimal refuses what strconv takes beyond plain decimals: hexadecimal,
// underscores, infinities.
func parseDecimal(text string) (float64, bool) {
	if strings.Trim(text, "0123456789.+-eE") != "" {
		return 0, false
	}
	v, err := strconv.ParseFloat(text, 64)
	return v, err == nil
}

// parseDigits reads digits alone.
func parseDigits(text string) (float64, bool) {
	if text == "" || strings.Trim(text, "0123456789") != "" {
		return 0, false
	}
	v, err := strconv.ParseFloat(text, 64)
	return v, err == nil
}

// numberHint tells how to write a number that could not be read.
func numberHint(number string) string {
	if strings.Contains(number, ",") {
		return "write the decimal point as a point and no commas between thousands"
	}
	return `write it like "5.25 in" or "5 1/4 in"`
}

func fits(d Dim, dims []Dim) bool {
	for _, want := range dims {
		if d == want {
			return true
		}
	}
	return len(dims) == 0
}

func dimNames(dims []Dim) string {
	names := make([]string, len(dims))
	for i, d := range dims {
		names[i] = string(d)
	}
	return strings.Join(names, " or ")
}

// leastSI is the least quantity above zero, in SI units of any dimension: far
// below every quantity of a mill, far above where products would vanish.
const leastSI = 1e-12

// largest is the largest quantity of a dimension in SI units: beyond anything
// in a mill, so that it can only be a slip of the pen.
func largest(d Dim) float64 {
	switch d {
	case DimLength:
		return 1e4
	case DimPressure:
		return 1e13
	case DimForce, DimTorque:
		return 1e9
	case DimStiffness:
		return 1e12
	case DimVolume:
		return 10
	}
	return 1e6
}

// Given tells whether the quantity was entered at all.
func (q Quantity) Given() bool { return q.Entered != "" }

// String gives back what was entered.
func (q Quantity) String() string { return q.Entered }

// MarshalText gives back what was entered.
func (q Quantity) MarshalText() ([]byte, error) { return []byte(q.Entered), nil }

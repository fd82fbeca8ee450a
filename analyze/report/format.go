package report

import (
	"math"
	"strconv"
	"strings"
)

// uncertaintyDecimals gives the number of decimals at which an uncertainty
// shows two significant digits, after JCGM 100:2008, 7.2.6. It is negative for
// uncertainties of 100 and more: two digits then end left of the point.
// u must be finite and above zero.
func uncertaintyDecimals(u float64) int {
	mantissa := strconv.FormatFloat(u, 'e', 1, 64) // rounds: 0.0996 is 1.0e-01
	exponent, _ := strconv.Atoi(mantissa[strings.IndexByte(mantissa, 'e')+1:])
	return 1 - exponent
}

// fixed writes x with so many decimals; negative decimals round to tens,
// hundreds and so on. It never writes a negative zero.
func fixed(x float64, decimals int) string {
	if decimals < 0 {
		unit := math.Pow10(-decimals)
		x, decimals = math.RoundToEven(x/unit)*unit, 0
	}
	text := strconv.FormatFloat(x, 'f', decimals, 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-")
	}
	return text
}

// grouped puts commas between the thousands of a fixed number.
func grouped(text string) string {
	sign := ""
	if strings.HasPrefix(text, "-") {
		sign, text = "-", text[1:]
	}
	whole, fraction, found := strings.Cut(text, ".")
	for i := len(whole) - 3; i > 0; i -= 3 {
		whole = whole[:i] + "," + whole[i:]
	}
	if found {
		whole += "." + fraction
	}
	return sign + whole
}

// plain writes a number that has no uncertainty of its own, to so many
// significant digits, without an exponent and without trailing zeros.
func plain(x float64, digits int) string {
	if !finite(x) {
		return notKnown
	}
	if x == 0 {
		return "0"
	}
	mantissa := strconv.FormatFloat(x, 'e', digits-1, 64)
	exponent, _ := strconv.Atoi(mantissa[strings.IndexByte(mantissa, 'e')+1:])
	decimals := digits - 1 - exponent
	text := fixed(x, decimals)
	if decimals > 0 {
		text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
	}
	return grouped(text)
}

// notKnown stands wherever a number is missing; a reason follows where there
// is one.
const notKnown = "not known"

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

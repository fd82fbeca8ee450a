package report

import (
	"math"
	"math/rand/v2"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// significant is how many digits a number shows from its first that is not 0, and
// its decimals; zeros that end a whole number are none (150 has two).
func significant(text string) (digits, decimals int) {
	text = strings.TrimLeft(strings.ReplaceAll(text, ",", ""), "+-")
	whole, fraction, found := strings.Cut(text, ".")
	if found {
		return len(strings.TrimLeft(whole+fraction, "0")), len(fraction)
	}
	return len(strings.TrimRight(strings.TrimLeft(whole, "0"), "0")), 0
}

// JCGM 100:2008, 7.2.6: at most two significant digits of uncertainty, and the
// value rounded with it.
func TestFiguresShowTwoDigitsOfUncertainty(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 20000 {
		e := estimate.Estimate{
			Value: math.Pow(10, 8*r.Float64()-4) * (2*r.Float64() - 1), System: math.Pow(10, 8*r.Float64()-5),
			DoF: 1 + 5*r.Float64(), Method: "drawn",
		}
		f := figureOf(e, unit{"x", 1})
		digits, decimals := significant(f.PlusMinus)
		if _, of := significant(f.Value); digits > 2 || digits < 1 || of != decimals {
			t.Fatalf("%+v prints as %s", e, f)
		}
		lo, hi := e.Interval95()
		half := (hi - lo) / 2
		shown, err := strconv.ParseFloat(strings.ReplaceAll(f.PlusMinus, ",", ""), 64)
		if err != nil || math.Abs(shown-half) > 0.051*half {
			t.Fatalf("%v prints as %s", half, f.PlusMinus)
		}
	}
}

// Every "a +/- b" of the whole text, in both systems of units.
func TestEveryFigureOfAReportIsRoundedByItsUncertainty(t *testing.T) {
	pair := regexp.MustCompile(`([+-]?[0-9][0-9,]*(?:\.[0-9]+)?) \+/- ([0-9][0-9,]*(?:\.[0-9]+)?)`)
	for _, system := range []mill.System{mill.US, mill.SI} {
		found := pair.FindAllStringSubmatch(joined(textOf(t, t1(t), t1Meta(), system)), -1)
		if len(found) < 20 {
			t.Fatalf("%s: only %d figures", system, len(found))
		}
		for _, m := range found {
			digits, decimals := significant(m[2])
			if _, of := significant(m[1]); digits > 2 || of != decimals {
				t.Errorf("%s: %s", system, m[0])
			}
		}
	}
}

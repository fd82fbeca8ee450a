package gauge

import (
	"fmt"
	"math"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Outcome is what a comparison with a limit says. The zero value is no verdict.
type Outcome int

// The outcomes.
const (
	Inconclusive Outcome = iota // something that the verdict needs is not known
	Pass
	Fail
	Undecided // the limit lies within the doubt
)

// String is the word that is printed and written to records.
func (o Outcome) String() string {
	switch o {
	case Pass:
		return "pass"
	case Fail:
		return "fail"
	case Undecided:
		return "undecided"
	}
	return "inconclusive"
}

// MarshalText gives the word.
func (o Outcome) MarshalText() ([]byte, error) { return []byte(o.String()), nil }

// Rule is how doubt counts in a decision: the limit is drawn in by a guard for
// a pass, and put out by as much for a fail; between them nothing is decided.
type Rule struct {
	Name     string
	Guard    float64 // of the expanded uncertainty U, k = 2
	Source   string
	Memory   bool // the figure is from memory
	FalsePct float64
}

// Rules are the decision rules by name. FalsePct is the chance, in percent,
// that a value found just at the edge of a pass lies beyond the limit after all
// (normal distribution, k = 2).
func Rules() []Rule {
	const ilac = "ILAC-G8:09/2019 clause 4.2"
	return []Rule{
		{"simple acceptance", 0, ilac, false, 50},
		{"guard band U", 1, ilac, false, 2.275},
		{"guard band 1.5 U", 1.5, ilac, true, 0.135},
		{"guard band 3 U", 3, ilac, true, 9.87e-8},
		{"ISO 14253-1", 0.825, "ISO 14253-1, guard 1.65 u", true, 4.947},
	}
}

// FindRule finds a decision rule by its name, in any case; "" is guard band U.
// The error is a mill.ErrUnknownName.
func FindRule(name string) (Rule, error) {
	if name == "" {
		name = "guard band U"
	}
	var known []string
	for _, r := range Rules() {
		if strings.EqualFold(r.Name, name) {
			return r, nil
		}
		known = append(known, r.Name)
	}
	return Rule{}, fmt.Errorf("%w: no decision rule %q; known: %s", mill.ErrUnknownName, name, strings.Join(known, ", "))
}

// Decision is one value against one limit.
type Decision struct {
	Outcome  Outcome
	Chance   float64 // that the true value keeps the limit; NaN where it is not known
	Expanded float64 // U of the value, k = 2 where it is well known
	Accept   float64 // largest value that passes; below 0 none can
}

// Decide compares the size of a value with a limit.
func (r Rule) Decide(v estimate.Estimate, limit float64) Decision {
	d := Decision{Chance: math.NaN(), Expanded: v.Expanded()}
	if !v.Known() || !(limit > 0) || math.IsNaN(d.Expanded) || math.IsInf(d.Expanded, 0) {
		return d
	}
	guard := r.Guard * d.Expanded
	d.Accept = limit - guard
	d.Chance = math.Max(0, v.ChanceBelow(limit)-v.ChanceBelow(-limit))
	switch size := math.Abs(v.Value); {
	case size <= d.Accept*(1+rounding):
		d.Outcome = Pass
	case size > (limit+guard)*(1+rounding):
		d.Outcome = Fail
	default:
		d.Outcome = Undecided
	}
	return d
}

// rounding keeps an error of exactly the limit on its right side where it was
// worked out from others.
const rounding = 1e-9

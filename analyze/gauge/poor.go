package gauge

import (
	"fmt"
	"math"
	"time"

	"tautramp/acquire/mill"
)

// Doubt is something said before a test starts.
type Doubt struct {
	Code string // stable word for machines
	Text string
	Stop bool // nothing can pass so: do not start
}

// The share of the limit of error that a reference's expanded uncertainty may
// have. Common practice: a quarter.
const referenceShare = 0.25

// BeforeStart says what is wrong with a test before it starts: a reference too
// poor for the limit, out of its range, overdue, failed, or of unknown error. The
// test needs its plan, instruments, limit and rule; day may be zero where it is
// not known. The errors are mill.ErrUnknownName for a limit or rule, and ErrKind.
func BeforeStart(t Test, day time.Time) ([]Doubt, error) {
	limit, err := ChooseLimit(t)
	if err != nil {
		return nil, err
	}
	rule, err := FindRule(orText(t.Rule, t.Plan.Rule))
	if err != nil {
		return nil, err
	}
	if err := checkKinds(t, limit); err != nil {
		return nil, err
	}
	var found []Doubt
	add := func(when, stop bool, code, format string, args ...any) {
		if when {
			found = append(found, Doubt{code, fmt.Sprintf(format, args...), stop})
		}
	}
	ref := t.Instruments.Reference
	add(limit.Name == "", false, "no-limit", "no limit is chosen: the test gives errors and no verdict")
	add(limit.Origin == FromMemory, false, "limit-from-memory", "the limits of %s are from memory: look them up and write them as [[gauge_limit]] in mill.toml", limit.Name)
	add(len(t.Plan.Points) < limit.LeastPoints, false, "few-points", "%s asks for at least %d points, the plan has %d", limit.Name, limit.LeastPoints, len(t.Plan.Points))
	add(!ref.Limit.Given() && ref.Bench == nil, true, "reference-unknown", "nothing is known of the error of the reference: write its limit, or its bench record")
	add(!day.IsZero() && ref.OverdueOn(day), false, "reference-overdue", "the check of the reference was due %s", ref.Due)
	add(ref.Bench != nil && ref.Bench.Verdict == Fail.String(), true, "reference-failed", "the reference failed its bench test of %s", benchDay(ref))
	add(outOfReach(t), true, "reference-range", "the reference ends at %s, and the plan's highest point is %s", ref.High, highest(t.Plan))
	found = append(found, tooPoor(t, limit, rule)...)
	return found, nil
}

// tooPoor weighs the reference and the least count against the limit.
func tooPoor(t Test, limit Limit, rule Rule) []Doubt {
	least := limit.least(t.Plan.SpanSI())
	if !(least > 0) {
		return nil
	}
	u := 0.0
	for _, q := range t.Plan.Points {
		_, std := readReference(t.Plan, t.Instruments, q.SI, Up)
		u = math.Max(u, 2*std)
	}
	count := t.Instruments.TestedCountSI / math.Sqrt(3) // expanded
	percent := func(v float64) float64 { return 100 * v / least }
	switch guard := rule.Guard * math.Hypot(u, count); {
	case guard >= least:
		return []Doubt{{"reference-hopeless", fmt.Sprintf("nothing can pass: the guard of rule %q is %.0f %% of the least limit of %s, from the reference and the least count alone", rule.Name, percent(guard), limit.Name), true}}
	case u > referenceShare*least:
		return []Doubt{{"reference-poor", fmt.Sprintf("the reference is too poor for %s: its expanded uncertainty is %.0f %% of the least limit, and a quarter is common practice", limit.Name, percent(u)), false}}
	case count > referenceShare*least:
		return []Doubt{{"count-coarse", fmt.Sprintf("the least count is too coarse for %s: it leaves %.0f %% of the least limit in doubt", limit.Name, percent(count)), false}}
	}
	return nil
}

func benchDay(i mill.Instrument) string {
	if i.Bench == nil {
		return ""
	}
	return i.Bench.Checked
}

func highest(p Plan) mill.Setting {
	if len(p.Points) == 0 {
		return p.High
	}
	return p.Points[len(p.Points)-1]
}

func outOfReach(t Test) bool {
	high := t.Instruments.Reference.High
	return high.Given() && highest(t.Plan).SI > high.SI*(1+rounding)
}

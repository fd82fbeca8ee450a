package report

import (
	"fmt"
	"math"

	"tautramp/analyze/gauge"
)

// benchVerdict is the verdict in words.
type benchVerdict struct {
	Word   string // "PASS", "FAIL", "UNDECIDED", "NO VERDICT"
	Says   string
	Memory bool // a limit is from memory
	Why    []string
	Worst  []string // comparisons that did not pass
}

func benchVerdictOf(r *gauge.Result, u benchUnits) benchVerdict {
	v := benchVerdict{Why: r.Verdict.Why, Memory: r.Limit.Origin == gauge.FromMemory || r.Limit.HystOrigin == gauge.FromMemory}
	by := fmt.Sprintf("%s, by the rule %s", limitName(r.Limit), ruleName(r.Rule))
	chance := ""
	if c := r.Verdict.Chance; finite(c) {
		chance = fmt.Sprintf(" The least chance of any comparison that the true value keeps its limit: %s.", chanceText(c))
	}
	switch r.Verdict.Outcome {
	case gauge.Pass:
		v.Word, v.Says = "PASS", "Keeps "+by+"."+chance
	case gauge.Fail:
		v.Word, v.Says = "FAIL", "Does not keep "+by+"."+chance
	case gauge.Undecided:
		v.Word, v.Says = "UNDECIDED", "The limit lies within the doubt: "+by+"."+chance
	default:
		v.Word, v.Says = "NO VERDICT", "Something that a verdict needs is missing."
		if r.Limit.Name != "" {
			v.Says = "Something that a verdict needs is missing: " + by + "."
		}
	}
	for _, c := range r.Verdict.Checks {
		if c.Outcome == gauge.Fail || c.Outcome == gauge.Undecided {
			v.Worst = append(v.Worst, checkText(c, u))
		}
	}
	if over := len(v.Worst) - shownChecks; over > 0 {
		v.Worst = append(v.Worst[:shownChecks], fmt.Sprintf("and %d more, in the JSON", over))
	}
	return v
}

// shownChecks is the most comparisons listed on the sheet.
const shownChecks = 6

func limitName(l gauge.Limit) string {
	text := clean(l.Name, textLength)
	switch l.Origin {
	case gauge.FromMemory:
		text += " (FROM MEMORY)"
	case gauge.Judgement:
		text += " (judgement)"
	}
	return text
}

func ruleName(r gauge.Rule) string {
	if r.Memory {
		return r.Name + " (its figure from memory)"
	}
	return r.Name
}

// chanceText is a probability that is never rounded to certainty.
func chanceText(p float64) string {
	switch {
	case p > 0.999:
		return "above 99.9 %"
	case p < 0.001:
		return "below 0.1 %"
	}
	return fixed(100*p, 1) + " %"
}

func checkText(c gauge.Check, u benchUnits) string {
	text := c.What + seriesSuffix(c.Series)
	if c.Nominal.Given() {
		text += ", at " + c.Nominal.Entered
	}
	text += ": " + figureOf(c.Value, u.err).String() + ", limit " + u.err.with(plain(u.err.show(c.LimitSI), 3))
	if c.Origin == gauge.FromMemory {
		text += " (FROM MEMORY)"
	}
	return text + ": " + c.Outcome.String() + ", chance to keep it " + chanceText(c.Chance)
}

// benchTable is one series, point by point.
type benchTable struct {
	Series string // "" where there is one
	Rows   []benchRow
	Tap    bool // a column for tapped less untapped
}

type benchRow struct {
	Mark    string
	Up      figure
	Down    figure
	Apart   figure // falling less rising
	Tap     figure
	Limit   string
	Outcome string // the worst of the point's
}

func benchTables(r *gauge.Result, u benchUnits) []benchTable {
	var all []benchTable
	for _, c := range r.Curves {
		t := benchTable{Series: string(c.Series), Tap: c.Series == gauge.Tapped && r.TapShift.Known()}
		for _, a := range c.At {
			limit, outcome := pointVerdict(r, c.Series, a)
			row := benchRow{
				Mark: plain(u.scale.show(a.Nominal.SI), 6), Limit: notKnown, Outcome: outcome,
				Up: figureOf(a.Up, u.err), Down: figureOf(a.Down, u.err), Apart: figureOf(a.UpDown, u.err), Tap: figureOf(a.TapShift, u.err),
			}
			if finite(limit) {
				row.Limit = plain(u.err.show(limit), 3)
			}
			t.Rows = append(t.Rows, row)
		}
		all = append(all, t)
	}
	return all
}

// pointVerdict is the limit of error at a point and the worst outcome there.
func pointVerdict(r *gauge.Result, s gauge.Series, a gauge.At) (limit float64, outcome string) {
	limit = math.NaN()
	rank := map[gauge.Outcome]int{gauge.Pass: 1, gauge.Undecided: 2, gauge.Inconclusive: 3, gauge.Fail: 4}
	worst, seen := gauge.Pass, false
	for _, c := range r.Verdict.Checks {
		if c.Series != s || c.Nominal != a.Nominal {
			continue
		}
		if c.What == "error, up" || c.What == "error, down" {
			limit = c.LimitSI
		}
		if seen = true; rank[c.Outcome] > rank[worst] {
			worst = c.Outcome
		}
	}
	if !seen {
		return limit, "not judged"
	}
	return limit, worst.String()
}

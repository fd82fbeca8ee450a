package report

import (
	"fmt"
	"math"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
)

// benchUnits are the units of a bench report: those of the instrument's own
// scale, whatever system the reader chose for others.
type benchUnits struct {
	scale unit // of marks
	err   unit // of errors
}

func benchUnitsOf(r *gauge.Result) benchUnits {
	entered := r.Test.Plan.High.Unit
	if len(r.Test.Plan.Points) > 0 {
		entered = r.Test.Plan.Points[0].Unit
	}
	u := unit{entered.Name, entered.SI}
	if u.name == "mm" {
		return benchUnits{u, unit{"um", 1e-6}}
	}
	return benchUnits{u, u}
}

// benchSheet is a bench report in words, before it becomes terminal text or
// paper.
type benchSheet struct {
	Title     string
	Rehearsal string
	Identity  []fact
	Verdict   benchVerdict
	Tables    []benchTable
	Figures   []fact
	Others    []fact // figures of other rules
	Budget    []budgetLine
	BudgetAt  string
	Record    []fact
	Warnings  []string
	Unchecked []string
	Cautions  []string
	Units     benchUnits
}

// ScaleName and ErrorName are for the page.
func (s benchSheet) ScaleName() string { return s.Units.scale.name }
func (s benchSheet) ErrorName() string { return s.Units.err.name }

func newBenchSheet(r *gauge.Result, m Meta) benchSheet {
	u := benchUnitsOf(r)
	s := benchSheet{
		Title: "Bench test of " + instrumentText(r.Test.Instruments.Tested), Rehearsal: benchRehearsal(r, m),
		Identity: benchIdentity(r, m), Verdict: benchVerdictOf(r, u), Tables: benchTables(r, u),
		Figures: benchFigures(r, u), Others: otherFigures(r, u), Record: recordFacts(r, u),
		Unchecked: r.NotChecked, Cautions: benchCautions(), Units: u,
	}
	s.BudgetAt, s.Budget = benchBudget(r, u)
	for _, w := range fileWarnings(m) {
		s.Warnings = append(s.Warnings, strings.ReplaceAll(w.Text, "ramps", "points"))
	}
	for _, w := range r.Warnings {
		s.Warnings = append(s.Warnings, clean(w.Text, textLength))
	}
	for _, n := range m.Notes {
		s.Warnings = append(s.Warnings, clean(n, textLength))
	}
	s.Warnings = bounded(s.Warnings)
	return s
}

func instrumentText(i mill.Instrument) string {
	text := named(i.Name, "an instrument of no name")
	if serial := clean(i.Serial, nameLength); serial != "" {
		text += " (" + serial + ")"
	}
	return text
}

func benchRehearsal(r *gauge.Result, m Meta) string {
	if !r.Test.Conditions.Simulated && !m.scaled() {
		return ""
	}
	return "REHEARSAL: these are no readings of a real instrument: judge none by them."
}

func benchIdentity(r *gauge.Result, m Meta) []fact {
	t, c := r.Test, r.Test.Conditions
	facts := []fact{
		{"Tested", instrumentText(t.Instruments.Tested)},
		{"Range", rangeText(t.Plan)},
		{"Reference", referenceText(t.Instruments.Reference)},
		{"Plan", planText(t.Plan)},
		{"Day", named(c.Day, notKnown)},
		{"Place", named(c.Place, notKnown)},
		{"By", named(c.By, notKnown)},
		{"Temperature", temperatureText(c.Temperature)},
	}
	if c.Medium != "" {
		facts = append(facts, fact{"Medium", clean(c.Medium, nameLength)})
	}
	if c.Height.Given() {
		facts = append(facts, fact{"Height", clean(c.Height.Entered, nameLength) + " above the reference; not corrected"})
	}
	if c.Note != "" {
		facts = append(facts, fact{"Note", clean(c.Note, textLength)})
	}
	return append(facts,
		fact{"Recording", named(m.base(), "name "+notKnown) + ", " + outcomeText(m.Outcome)},
		fact{"Seal", m.seal()},
		fact{"Computed by", named(m.Program, notKnown)})
}

func rangeText(p gauge.Plan) string {
	low := "0"
	if p.Low.Given() {
		low = p.Low.Entered
	}
	return low + " to " + p.High.Entered
}

func referenceText(i mill.Instrument) string {
	text := instrumentText(i)
	switch {
	case i.Bench != nil && len(i.Bench.Points) > 0:
		text += ", corrected by its bench record of " + clean(i.Bench.Checked, nameLength)
	case i.Limit.Given():
		text += ", limit of error " + i.Limit.Entered
	}
	if i.Due != "" {
		text += ", next check " + clean(i.Due, nameLength)
	}
	return text
}

func planText(p gauge.Plan) string {
	ways := "up"
	if p.Down {
		ways = "up and down"
	}
	text := fmt.Sprintf("%s: %d points, %s", named(p.Name, "of no name"), len(p.Points), ways)
	if p.Repeats > 1 {
		text += fmt.Sprintf(", %d times", p.Repeats)
	}
	if p.Runs > 1 {
		text += fmt.Sprintf(", %d mountings", p.Runs)
	}
	for i, s := range p.Series {
		text += map[bool]string{true: "; ", false: ", then "}[i == 0] + string(s)
	}
	return text
}

func temperatureText(e estimate.Estimate) string {
	if !e.Known() {
		return "not measured"
	}
	return figureOf(e, unit{"degrees C", 1}).String()
}

// shareText is a figure of the scale with its share of the span.
func shareText(e estimate.Estimate, u unit, spanSI float64) string {
	text := figureOf(e, u).String()
	if e.Known() && spanSI > 0 {
		text += fmt.Sprintf(" (%s %% of the range)", plain(100*math.Abs(e.Value)/spanSI, 2))
	}
	return text
}

func benchFigures(r *gauge.Result, u benchUnits) []fact {
	of := func(e estimate.Estimate) string { return shareText(e, u.err, r.SpanSI) }
	facts := []fact{
		{"Largest error", of(r.Largest)},
		{"Error at the lowest point", of(r.Lines.ZeroError)},
		{"Error of the span", of(r.Lines.SpanError)},
		{"Shift of the zero", of(r.ZeroShift)},
		{"Falling less rising, largest", of(r.UpDown)},
		{"Falling less rising, mean", of(r.MeanUpDown)},
		{"Dead band", of(r.DeadBand)},
		{"Hysteresis without it", of(r.Hysteresis)},
	}
	for _, c := range r.Curves {
		scatter := notKnown + ": " + c.Scatter.Why
		if c.Scatter.Known() {
			scatter = u.err.with(plain(u.err.show(c.Scatter.Value), 2)) + ", standard deviation; " + c.Scatter.Method
		}
		facts = append(facts, fact{"Scatter of one reading" + seriesSuffix(c.Series), scatter})
	}
	if len(r.Test.Plan.Series) > 1 {
		facts = append(facts, fact{"Tapped less untapped, largest", of(r.TapShift)})
	}
	return append(facts,
		fact{"Linearity, independent", of(r.Conformity.Independent.Deviation)},
		fact{"Linearity, terminal-based", of(r.Conformity.Terminal.Deviation)},
		fact{"Linearity, zero-based", of(r.Conformity.ZeroBased.Deviation)})
}

func seriesSuffix(s gauge.Series) string {
	if s == "" {
		return ""
	}
	return ", " + string(s)
}

// otherFigures are those that other rules ask for.
func otherFigures(r *gauge.Result, u benchUnits) []fact {
	f, pct := r.Flow, percent()
	facts := []fact{
		{"43 CFR 3175.135, largest error", figureOf(f.Error, pct).String()},
		{"... hysteresis", figureOf(f.Hysteresis, pct).String()},
		{"... repeatability", figureOf(f.Repeatability, pct).String()},
		{"... together (form from memory)", figureOf(f.Combined, pct).String()},
		{"In the manner of ISO 376 (from memory), reversibility", forceText(r.Force.Reversibility)},
		{"... repeatability", forceText(r.Force.Repeatability)},
		{"... reproducibility", forceText(r.Force.Reproducibility)},
	}
	if worst, ok := worstGuide(r); ok {
		facts = append(facts, fact{"After EURAMET cg-17 (formulas from memory), largest U", u.err.with(plain(u.err.show(worst.ExpandedSI), 2)) +
			", error span there " + u.err.with(plain(u.err.show(worst.ErrorSpanSI), 2))})
	}
	return facts
}

func forceText(e estimate.Estimate) string { return figureOf(e, unit{"%", 1}).String() }

func worstGuide(r *gauge.Result) (worst gauge.Guide, ok bool) {
	for _, a := range r.Curves[0].At {
		if a.Guide.ExpandedSI > worst.ExpandedSI {
			worst, ok = a.Guide, true
		}
	}
	return worst, ok
}

// benchBudget is the budget of the mean of both ways where it is largest.
func benchBudget(r *gauge.Result, u benchUnits) (at string, lines []budgetLine) {
	worst, most := gauge.At{}, -1.0
	for _, a := range r.Curves[0].At {
		if std := a.Mean.Std(); std > most {
			worst, most = a, std
		}
	}
	for _, t := range worst.Budget {
		lines = append(lines, budgetLine{t.Name, u.err.with(plain(u.err.show(t.StdSI), 2)), t.From})
	}
	return worst.Nominal.Entered, lines
}

func recordFacts(r *gauge.Result, u benchUnits) []fact {
	due := r.Record().Due
	return []fact{
		{"Correction", "the error of each point with its sign changed, rising and falling apart" + map[bool]string{true: "; untapped"}[len(r.Test.Plan.Series) > 1]},
		{"Between points", "on straight lines; beyond the ends the last one holds with twice its doubt"},
		{"Next check", named(due, notKnown+": no day was given")},
	}
}

func benchCautions() []string {
	return []string{
		"Oil under pressure injects through skin. Look for leaks with card, never with a hand; bleed before any joint is loosened.",
		"Never above the range of the weaker of the two instruments, nor above what hoses and fittings are made for.",
		"The makers' manuals, site rules, local codes and qualified persons come before this sheet.",
	}
}

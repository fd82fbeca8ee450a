package report

import (
	"bufio"
	"fmt"
	"io"
	"strings"

	"tautramp/analyze/gauge"
)

// BenchText writes a bench result for a terminal, like Text. The error is the
// writer's.
func BenchText(w io.Writer, r *gauge.Result, m Meta) error {
	p := &printer{w: bufio.NewWriter(w)}
	s := newBenchSheet(r, m)
	p.para(0, s.Rehearsal)
	p.para(0, s.Title)
	p.facts(s.Identity)
	for _, t := range s.Tables {
		p.benchTable(s, t)
	}
	p.heading("Figures")
	p.facts(s.Figures)
	p.heading("By other rules")
	p.facts(s.Others)
	p.heading("Doubt in the mean error")
	p.para(2, "At "+s.BudgetAt+", where it is largest:")
	for _, l := range s.Budget {
		p.facts([]fact{{l.Name, l.Std + "; " + l.From}})
	}
	p.heading("Record of the instrument")
	p.facts(s.Record)
	p.list("Warnings", s.Warnings)
	p.list("Not checked", s.Unchecked)
	p.list("Cautions", s.Cautions)
	p.heading("Verdict")
	p.para(2, s.Verdict.Word+". "+s.Verdict.Says)
	for _, why := range append(append([]string{}, s.Verdict.Why...), s.Verdict.Worst...) {
		p.para(2, "- "+why)
	}
	if s.Rehearsal != "" {
		p.para(2, "REHEARSAL: judge no instrument by this.")
	}
	return p.w.Flush()
}

func (p *printer) benchTable(s benchSheet, t benchTable) {
	p.heading("Errors" + seriesSuffix(gauge.Series(t.Series)) + ": indicated less reference")
	const layout = "  %9s %15s %15s %14s %7s  %s"
	in := func(what string) string { return what + " (" + s.ErrorName() + ")" }
	p.line(fmt.Sprintf(layout, s.ScaleName(), in("up"), in("down"), "down less up", "limit", ""))
	for _, r := range t.Rows {
		p.line(fmt.Sprintf(layout, r.Mark, benchCell(r.Up), benchCell(r.Down), benchCell(r.Apart), r.Limit, r.Outcome))
	}
	p.para(2, "+/-: half of the 95 % interval.")
}

// benchCell is a figure in a narrow column.
func benchCell(f figure) string {
	switch {
	case f.Why != "":
		return "-"
	case f.PlusMinus == "":
		return f.Value
	}
	return strings.Join([]string{f.Value, f.PlusMinus}, " +/- ")
}

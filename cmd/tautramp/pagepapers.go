package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"slices"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
	"tautramp/analyze/gauge"
	"tautramp/analyze/report"
	"tautramp/cmd/tautramp/page"
	"tautramp/cmd/tautramp/station"
)

// paperwork is what papers are made from.
type paperwork struct {
	rec  *recording.Recording
	res  *analyze.Result // nil where the recording gives no result
	meta report.Meta
}

// rigRemoved is what the page has confirmed before a card is printed.
const rigRemoved = "rig removed"

// recordPapers runs a visit and makes the papers of its recording.
func recordPapers(ctx context.Context, job recordJob, e env) (page.Papers, error) {
	rec, alarm, err := recordAndRead(ctx, job, e)
	if err != nil {
		return page.Papers{}, err
	}
	papers, err := papersOf(rec, filepath.Base(job.path))
	papers.Alarm = alarm
	return papers, err
}

// recordAndRead runs a visit and reads its recording back; after an alarm too.
func recordAndRead(ctx context.Context, job recordJob, e env) (*recording.Recording, string, error) {
	err := record(ctx, job, e)
	if err != nil && !onlyAlarm(err) {
		return nil, "", explained(err)
	}
	said := ""
	if alarm, ok := errors.AsType[*alarmError](err); ok {
		said = alarm.text
	}
	rec, err := recording.ReadFile(job.path)
	return rec, said, err
}

// openPapers makes the papers of a recording that a browser sent.
func openPapers(r io.Reader) (page.Papers, error) {
	rec, err := recording.Read(r)
	if err != nil {
		return page.Papers{}, explained(err)
	}
	h := rec.Header
	name := fmt.Sprintf("%s %s %s", h.Tensioner, h.Band, h.Started.Format("2006-01-02 15:04"))
	if h.Bench == nil {
		return papersOf(rec, name)
	}
	bench, err := station.Read(rec)
	if err != nil {
		return page.Papers{}, err
	}
	res, err := gauge.Evaluate(bench.Test(rec.Seal))
	name = h.Bench.Tested + h.Started.Format(" 2006-01-02 15:04")
	return benchPapers(res, benchMeta(name, []*recording.Recording{rec}, bench.Lost()), err)
}

// papersOf computes a recording's result. A recording that gives none has a
// name and nothing else.
func papersOf(rec *recording.Recording, name string) (page.Papers, error) {
	papers := page.Papers{Name: name, Seal: rec.Seal, RigOff: slices.ContainsFunc(rec.Entries, saysRigRemoved), Own: paperwork{rec: rec}}
	res, meta, err := resultOf(rec, name, mill.Pressure{})
	if err != nil {
		return papers, explained(err)
	}
	papers.Own = paperwork{rec, res, meta}
	papers.Figures = func(w io.Writer) error { return report.JSON(w, res, meta) }
	papers.Sheet = func(w io.Writer, s mill.System) error { return report.HTML(w, res, meta, s) }
	papers.Plot = func(w io.Writer, s mill.System) error { return report.SVG(w, res, meta, report.PlotLoop, s) }
	return papers, nil
}

func saysRigRemoved(e recording.Entry) bool {
	return e.Event != nil && e.Event.Kind == recording.Confirmed && e.Event.Text == rigRemoved
}

// explained puts the next step behind an error, as the command line does.
func explained(err error) error {
	if hint := classify(err).hint; hint != "" {
		return fmt.Errorf("%w. Next: %s", err, hint)
	}
	return err
}

var errNoResult = errors.New("that recording gives no result")

// verify records one approach to the number of a result, and compares.
func (o *pageOptions) verify(ctx context.Context, job recordJob, before page.Papers, e env) (page.Papers, error) {
	of, _ := before.Own.(paperwork)
	if of.res == nil || !of.res.AtRising.SettingSI.Known() {
		return page.Papers{}, errNoResult
	}
	job.aimSI = of.res.AtRising.SettingSI.Value
	rec, alarm, err := recordAndRead(ctx, job, e)
	if err != nil {
		return page.Papers{}, err
	}
	papers := page.Papers{Name: filepath.Base(job.path), Seal: rec.Seal, Alarm: alarm, Own: paperwork{rec: rec},
		RigOff: slices.ContainsFunc(rec.Entries, saysRigRemoved), Verdict: "undecided"}
	a, err := approachIn(rec, of.res, before.Name, papers.Name)
	if err != nil {
		papers.Says = explained(err).Error()
		return papers, nil
	}
	if a.Agreement != analyze.Undecided {
		papers.Verdict = string(a.Agreement)
	}
	papers.Says = approachWords(a, of.res.Setup.Tensioner.SettingRole())
	return papers, nil
}

// approachWords says what was read, in both systems.
func approachWords(a *analyze.Approach, role mill.Role) string {
	if a.Why != "" {
		return a.Why
	}
	in := func(s mill.System) string {
		stress := s.Unit(mill.RoleStress)
		figure := func(e estimate.Estimate) string {
			low, high := e.Interval95()
			return fmt.Sprintf("%.4g +/- %.2g", stress.FromSI(e.Value), stress.FromSI((high-low)/2))
		}
		return fmt.Sprintf("%s by the curve and %s as read, band %s", figure(a.ExpectedPa), figure(a.ReadPa), stress.Name)
	}
	us, si := mill.US.Unit(role), mill.SI.Unit(role)
	return fmt.Sprintf("at %.4g %s (%.3g %s): %s (%s)", us.FromSI(a.SettingSI), us.Name, si.FromSI(a.SettingSI), si.Name, in(mill.US), in(mill.SI))
}

// card writes the card that the page asks for.
func (o *pageOptions) card(w io.Writer, of page.Papers, wish page.CardWish, s mill.System) error {
	own, _ := of.Own.(paperwork)
	proof, _ := wish.Proof.Own.(paperwork)
	if own.res == nil || proof.rec == nil {
		return errNoResult
	}
	c := cardFlags{from: wish.From, hold: wish.Hold, sameWheel: wish.SameWheel}
	order, err := c.order()
	if err != nil {
		return err
	}
	if order.Others, err = othersOf(own.res, wish.Bands); err != nil {
		return err
	}
	if order.Proof, err = approachIn(proof.rec, own.res, of.Name, wish.Proof.Name); err != nil {
		return err
	}
	return report.Card(w, own.res, own.meta, order, s)
}

// benchTest records a bench test and evaluates it.
func (o *pageOptions) benchTest(ctx context.Context, order page.Order, e env) (page.Papers, error) {
	wish := order.Bench
	b := benchOptions{mill: o.mill, plan: wish.Plan, high: wish.Range, ports: order.Ports, baud: o.baud, anyway: wish.Anyway,
		speed: o.speed, patience: o.patience, said: order.Said, resultFlags: resultFlags{units: string(o.system), plot: string(report.PlotLoop)},
		about: recording.Bench{Tested: wish.Tested, Reference: wish.Reference, Place: wish.Place, By: wish.By}}
	job, err := b.prepare(e)
	if err != nil {
		return page.Papers{}, explained(err)
	}
	b.show = func(s station.Status) { order.ShowBench(s, job.plan.High.Unit) }
	testErr := b.record(ctx, job, e)
	if testErr != nil && !onlyAlarm(testErr) {
		return page.Papers{}, explained(testErr)
	}
	res, meta, err := computeBench(b.out)
	papers, err := benchPapers(res, meta, err)
	if alarm, ok := errors.AsType[*alarmError](testErr); ok {
		papers.Alarm = alarm.text
	}
	return papers, err
}

// benchPapers are the papers of a bench test.
func benchPapers(res *gauge.Result, meta report.Meta, err error) (page.Papers, error) {
	if err != nil {
		return page.Papers{Name: meta.File}, explained(err)
	}
	papers := page.Papers{Name: meta.File, Seal: meta.Seal, Verdict: res.Verdict.Outcome.String(), Own: paperwork{meta: meta},
		Sheet: func(w io.Writer, _ mill.System) error { return report.BenchHTML(w, res, meta) },
		Plot:  func(w io.Writer, _ mill.System) error { return report.BenchSVG(w, res) }}
	papers.Says = fmt.Sprintf("%s against %s, %s", res.Test.Instruments.Tested.Name, res.Test.Instruments.Reference.Name, res.Test.Plan.Name)
	return papers, nil
}

// benchPlans are the plans that the program brings.
func benchPlans() []page.Plan {
	var out []page.Plan
	for _, name := range gauge.PlanNames() {
		text, err := gauge.PlanText(name)
		if err != nil {
			continue // built in: cannot be
		}
		about := ""
		if p, err := gauge.ParsePlan(text); err == nil {
			about = p.Name
		}
		out = append(out, page.Plan{Name: name, About: about})
	}
	return out
}

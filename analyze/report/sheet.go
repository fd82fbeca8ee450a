package report

import (
	"errors"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// fact is one line of a report: a label and what is known of it.
type fact struct{ Label, Value string }

// sheet is a report in words, before it becomes terminal text or paper. Both
// are made from it, so that they never say different things.
type sheet struct {
	Title       string // tensioner and band
	Predicted   string // that it was not measured with this band; "" where it was
	Rehearsal   string // a warning that stands above everything; "" for a real visit
	Identity    []fact
	TargetText  string // "9,500 band psi"
	Limit       string // of the setting
	NoTarget    string // why there is no setting in either direction; "" where there is one
	Targets     []aim  // rising, falling
	Budget      []budgetLine
	HalfBudget  []budgetLine // of the half-width, in the text only
	F0Budget    []budgetLine // of F0, in the text only
	Overshoot   string       // what to do after passing the number
	Friction    []fact       // friction and half-width
	Verdict     verdict      // on the half-width
	Drivetrain  drivetrain
	Bands       []fact // on file: whether this tensioner can bring them to their target
	Found       foundSheet
	Before      beforeSheet
	Running     []fact    // the one-sided running band
	RunningNote string    // what it is
	Branches    []fact    // the two lines
	Table       roundRows // both branches at round settings
	Assumptions []fact
	Instruments []fact
	Fitted      []fact // in the text only
	Warnings    []string
	Unchecked   []string
	Cautions    []string
	Units       units
}

// newSheet words a result.
func newSheet(r *analyze.Result, m Meta, s mill.System) sheet {
	u := unitsFor(r.Setup.Tensioner, s)
	rising, falling := aimOf(r, analyze.Rising, u), aimOf(r, analyze.Falling, u)
	return sheet{
		Title:       titleText(r),
		Predicted:   predictedText(r, u),
		Rehearsal:   rehearsalText(r, m),
		Identity:    identity(r, m, u),
		TargetText:  targetText(r, u),
		NoTarget:    noTarget(r, rising, falling, s),
		Targets:     []aim{rising, falling},
		Budget:      rising.Budget,
		HalfBudget:  budgetOf(r.Working.Budget, u.setting),
		F0Budget:    budgetOf(r.Friction.F0Budget, u.force),
		Limit:       limitText(r, u),
		Overshoot:   overshootText(r, u),
		Friction:    frictionFacts(r, u),
		Verdict:     verdictOf(r),
		Drivetrain:  drivetrainOf(r, u, s),
		Bands:       reachFacts(r, u),
		Found:       foundOf(m.Found, u),
		Before:      beforeOf(m.Before, m.BeforeFile, u),
		Running:     runningFacts(r, u),
		RunningNote: runningNote(),
		Branches:    []fact{branchFact(analyze.Rising, r.Rising, u), branchFact(analyze.Falling, r.Falling, u)},
		Table:       rowsOf(r, u),
		Assumptions: assumptions(r, u),
		Instruments: instrumentFacts(r, u),
		Fitted:      append(fitted(r, u), triedFacts(r, u)...),
		Warnings:    warningTexts(r, m),
		Unchecked:   unchecked(),
		Cautions:    Cautions(),
		Units:       u,
	}
}

// noTarget is the one reason why neither direction has a setting.
func noTarget(r *analyze.Result, rising, falling aim, s mill.System) string {
	if rising.Set.Why == "" || rising.Set.Why != falling.Set.Why {
		return ""
	}
	if out, ok := errors.AsType[*analyze.OutOfRangeError](r.TargetError()); ok {
		return Explain(out, s)
	}
	return rising.Set.Why
}

func titleText(r *analyze.Result) string {
	return named(r.Setup.Tensioner.Name, "tensioner") + " with band " + named(r.Setup.Band.Name, "of no name")
}

// named is a name from the profile, or a word where there is none.
func named(name, otherwise string) string {
	if name = clean(name, nameLength); name != "" {
		return name
	}
	return otherwise
}

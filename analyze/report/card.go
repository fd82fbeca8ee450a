package report

import (
	"bytes"
	_ "embed"
	"fmt"
	"html/template"
	"io"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

//go:embed card.html
var cardHTML string

//go:embed card.css
var cardCSS string

// CardOrder is what somebody asks of a card. The zero value is refused: a number
// without a direction is the wrong number half of the time.
type CardOrder struct {
	Direction analyze.Direction // from which side the number is approached
	Hold      mill.Hold         // what becomes of the pressure once it is set; "" as the profile says
	Proof     *analyze.Approach // a fresh approach that checked the number; nil: none was made
	Others    []*analyze.Result // of other bands, predicted from this one; in the order of the card
	SameWheel bool              // somebody confirmed that with the others the same weight is moved, from where the wheel stood
}

// CardError is a card that is not printed, and why.
type CardError struct {
	Reason string // lower case, without a stop
	Next   string // what to do
}

func (e *CardError) Error() string { return "no card: " + e.Reason + "; " + e.Next }

// scatterMost is the largest scatter between ramps, as a share of the target,
// with which a card is printed. Judgement.
const scatterMost = 0.01

// card is a card in words.
type card struct {
	Style     template.CSS
	Title     string
	Mill      string
	Rehearsal string
	Direction analyze.Direction
	Rule      string // how to come to the number
	Rows      []cardRow
	Limit     string
	ReadOn    string
	HeldBy    string
	Measured  string
	Doubts    []string
	OnFile    []string // what the tensioner can do for each band on file
	Void      []string
	Cautions  []string
	Recording string
	Seal      string
}

// cardRow is one band.
type cardRow struct {
	Band     string
	Made     string // "measured", or from which band it was worked out
	Stress   string // target, in both systems
	Number   figure
	Other    string // the number in the other system
	Between  string // the interval in words
	First    string // what has to be done before; "" when nothing
	Overshot string
	Drift    string
}

// Card writes the card of a tensioner as one page for a small sheet, in large
// print and in both systems of units, s first. Errors: *CardError, or the
// writer's.
func Card(w io.Writer, r *analyze.Result, m Meta, o CardOrder, s mill.System) error {
	if o.Hold == "" {
		o.Hold = r.Setup.Tensioner.Hold
	}
	if len(o.Others) > 0 && !o.SameWheel {
		return &CardError{"it has bands that were not measured", "confirm that the same weight is moved with them and the wheel stands where it stood"}
	}
	for _, each := range append([]*analyze.Result{r}, o.Others...) {
		if err := refuseCard(each, o); err != nil {
			return err
		}
	}
	t, err := template.New("card").Funcs(template.FuncMap{"typeset": typeset, "arrow": arrow}).Parse(cardHTML)
	if err != nil {
		return err
	}
	var b bytes.Buffer
	if err := t.Execute(&b, newCard(r, m, o, s)); err != nil {
		return err
	}
	_, err = w.Write(b.Bytes())
	return err
}

// refuseCard names the first thing that forbids a card.
func refuseCard(r *analyze.Result, o CardOrder) error {
	at, limit := aimed(r, o.Direction), r.Setup.LimitSI
	switch {
	case o.Direction != analyze.Rising && o.Direction != analyze.Falling:
		return &CardError{"it has no direction", "say from which side the number is to be approached: from below or from above"}
	case !at.SettingSI.Known():
		return &CardError{"the setting for the target of " + named(r.Setup.Band.Name, "the band") + " is not known: " + unknownWhy(at.SettingSI), "mend that and ramp again, or leave the band off the card"}
	case limit > 0 && at.SettingSI.Value > limit:
		return &CardError{"the number would lie above the tensioner's limit", "give the band a lower target"}
	case r.ScatterShare(o.Direction) > scatterMost:
		return &CardError{fmt.Sprintf("the ramps stray by %.1f %% of the target, more than %.0f %%", 100*r.ScatterShare(o.Direction), 100*scatterMost),
			"find what moves between the ramps, and ramp again"}
	case o.Direction == analyze.Falling && !r.LoadPastSI().Known():
		return &CardError{"an approach from above: " + unknownWhy(r.LoadPastSI()), "print a card for an approach from below"}
	case o.Proof != nil && o.Proof.Agreement == analyze.Differs:
		return &CardError{"the fresh approach lies outside the interval", "find what changed, and ramp again"}
	case r.Setup.Tensioner.SetBy == mill.SetByPressure && o.Hold == "":
		return &CardError{"nothing says what holds the pressure once it is set", "say whether it is maintained or locked in"}
	}
	return nil
}

func aimed(r *analyze.Result, d analyze.Direction) analyze.TargetSetting {
	if d == analyze.Falling {
		return r.AtFalling
	}
	return r.AtRising
}

func newCard(r *analyze.Result, m Meta, o CardOrder, s mill.System) card {
	u, v := unitsFor(r.Setup.Tensioner, s), unitsFor(r.Setup.Tensioner, otherSystem(s))
	rows := []cardRow{rowFor(r, r.Dial, o, u, v)}
	for _, each := range o.Others {
		rows = append(rows, rowFor(each, r.Dial, o, u, v))
	}
	return card{
		Style: template.CSS(cardCSS), Title: named(r.Setup.Tensioner.Name, "tensioner of no name"), Mill: named(r.Setup.Mill.Name, ""),
		Rehearsal: rehearsalText(r, m), Direction: o.Direction, Rule: cardRule(o.Direction),
		Rows: rows, OnFile: onFile(r, o, u),
		Limit: bothUnits(r.Setup.LimitSI, u.setting, v.setting), ReadOn: readOn(r, o.Direction), HeldBy: heldBy(r, o.Hold),
		Measured: startedText(m), Doubts: cardDoubts(r, o), Void: cardVoid(), Cautions: cardCautions(),
		Recording: m.base(), Seal: m.seal(),
	}
}

func otherSystem(s mill.System) mill.System {
	if s == mill.SI {
		return mill.US
	}
	return mill.SI
}

func rowFor(r *analyze.Result, dial analyze.Dial, o CardOrder, u, v units) cardRow {
	at := aimed(r, o.Direction)
	all := at.TrueSI
	if !all.Known() {
		all = at.SettingSI
	}
	number, other := figureOf(all, u.setting), figureOf(all, v.setting)
	row := cardRow{
		Band: named(r.Setup.Band.Name, "band of no name"), Stress: bothUnits(r.Setup.TargetPa, u.stress, v.stress),
		Number: number, Other: other.short(), Drift: driftText(r, o, u, v), Made: madeText(r),
	}
	if onDial := dial.Read(o.Direction, all); onDial.Reading.Known() {
		row.Number = dialFigure(onDial.Reading, dial)
		row.Other = number.short() + " on the transducer, " + other.short()
	}
	if number := row.Number; number.PlusMinus != "" {
		row.Between = fmt.Sprintf("%s to %s %s, counting all doubt", number.Low, number.High, number.Unit)
	}
	switch reset := r.ResetSI; {
	case o.Direction == analyze.Falling:
		past := r.LoadPastSI()
		_, past.Value = past.Interval95() // an amount to be exceeded
		text := readAt(dial, analyze.Rising, past, u, v)
		row.First = fmt.Sprintf("First load up to %s, never past the limit.", text)
		row.Overshot = fmt.Sprintf("Went below it? Load up to %s again, then come down.", text)
	case reset.Known():
		row.Overshot = fmt.Sprintf("Went past it? Drop to %s, then come up again.", readAt(dial, analyze.Falling, reset, u, v))
	default:
		row.Overshot = "Went past it? Release well below the number, then come up again."
	}
	return row
}

func bothUnits(si float64, u, v unit) string {
	if !finite(si) || si <= 0 {
		return notKnown
	}
	return u.with(plain(u.show(si), 4)) + " (" + v.with(plain(v.show(si), 3)) + ")"
}

// driftText is the one-sided band in which the stress may wander afterwards.
func driftText(r *analyze.Result, o CardOrder, u, v units) string {
	run := r.Running
	if o.Hold == mill.HoldLocked && o.Direction == analyze.Rising {
		gain, drop := figureOf(run.Locked.GainPa, u.stress), figureOf(run.Locked.DropSI, u.setting)
		if gain.Why != "" {
			return "Locked in, the band gains little and the gauge falls by up to " + figureOf(r.Working.HalfSI, u.setting).short() + "; how little is not known: " + gain.Why + "."
		}
		return fmt.Sprintf("Locked in, vibration adds up to %s (%s), and the gauge falls by up to %s. That is not a leak.",
			u.stress.with(signed(gain)), figureOf(run.Locked.GainPa, v.stress).short(), drop.short())
	}
	change := run.AfterRisingPa
	if o.Direction == analyze.Falling {
		change = run.AfterFallingPa
	}
	text := oneSided(change, u.stress)
	if !change[0].Known() || !change[1].Known() {
		return "How far the band may drift once it is set is " + text + "."
	}
	return "Once set, friction lets the band drift by " + text + ", to this side only."
}

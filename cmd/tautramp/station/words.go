package station

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"tautramp/acquire/recording"
	"tautramp/analyze/gauge"
	"tautramp/protocol"
)

// Words of Status.Link.
const (
	linkLost      = "lost, waiting for it"
	linkSilent    = "silent"
	linkRestarted = "started again"
)

// Cautions are to be read before a bench test.
func Cautions(p gauge.Plan) []string {
	if !p.ReferenceStreams() {
		return []string{
			"Never drive a spindle against its stop. The makers' manuals come before anything this program says.",
		}
	}
	return []string{
		"Stay below the lowest limit of pump, hose, fittings, gauge and reference. The makers' manuals, local codes, site rules and qualified people come before anything this program says.",
		"Look for leaks with a card, never with a hand: oil under the skin is an emergency for surgery, however small it looks.",
		"Loosen no joint under pressure: let all of it out first. Eye protection; stay out of the line of the dial's window and its back.",
	}
}

func alarmEvent(kind AlarmKind, text string) (recording.EventKind, string) {
	return recording.Alarm, string(kind) + ": " + text
}

// leadName is what the operator steers by.
func (b *Bench) leadName() string {
	switch {
	case b.plan.ReferenceStreams():
		return "the reference"
	case b.plan.Kind == gauge.Rig:
		return "the measuring rig"
	default:
		return "the indicator"
	}
}

// show writes a figure in the plan's unit, to a ten-thousandth of the span.
func (b *Bench) show(si float64) string {
	unit := b.plan.High.Unit
	if math.IsNaN(si) {
		return "-- " + unit.Name
	}
	decimals := int(math.Ceil(-math.Log10(unit.FromSI(b.plan.SpanSI()) * 1e-4)))
	text := strconv.FormatFloat(unit.FromSI(si), 'f', min(max(decimals, 0), 6), 64)
	if strings.Trim(text, "-0.") == "" {
		text = strings.TrimPrefix(text, "-")
	}
	return text + " " + unit.Name
}

// seconds writes a time to wait or that was waited.
func seconds(s float64) string {
	if s >= 90 {
		return fmt.Sprintf("%.0f min", math.Ceil(s/60))
	}
	return fmt.Sprintf("%.0f s", math.Ceil(s-0.05))
}

// readingOf tells what was read at a point, or at zero.
func (b *Bench) readingOf(nominal string, reference, indicated gauge.Level) string {
	var parts []string
	if nominal != "" {
		parts = append(parts, nominal)
	}
	if reference.N > 0 {
		parts = append(parts, "reference "+b.show(reference.SI))
	}
	if indicated.N > 0 {
		parts = append(parts, "shows "+b.show(indicated.SI-b.baseSI))
	}
	return strings.Join(parts, ", ")
}

func (b *Bench) limitText(x float64, atEnd bool) string {
	if atEnd {
		return fmt.Sprintf("%s is at the end of its range: stop, let it down slowly", b.leadName())
	}
	return fmt.Sprintf("%s stands at %s and the limit is %s: stop, let it down slowly", b.leadName(), b.show(x), b.show(b.limit))
}

func (b *Bench) blindText(status protocol.Status) string {
	why := "there is no reading of " + b.leadName()
	if status == protocol.Fault {
		why = "the sensor of " + b.leadName() + " reports a fault"
	}
	return why + " while there is load: stop, let it down slowly"
}

// instruction is what to do now, one sentence without what changes from second
// to second.
func (b *Bench) instruction() string {
	if alarm, _ := b.guard.gravest(); alarm != NoAlarm {
		return "STOP - let it down slowly"
	}
	s := b.step()
	if (!b.known || b.lead() == nil) && s.kind != Done {
		return "wait for the boards"
	}
	if b.away() && s.kind != Done {
		return "wait: a board is away"
	}
	switch s.kind {
	case WarmUp:
		return "leave everything on: it warms up"
	case Mounting:
		return "take the instrument off, mount it again, then press"
	case Exercise:
		if b.swung {
			return fmt.Sprintf("exercise %d of %d: slowly down, all the way", s.cycle, b.plan.Exercise)
		}
		return fmt.Sprintf("exercise %d of %d: slowly up to %s", s.cycle, b.plan.Exercise, b.plan.High.Entered)
	case ZeroBefore, ZeroAfter:
		return b.zeroWords()
	case TopHold:
		if math.Abs(b.x()-s.target.Nominal.SI) > s.near/topNear {
			return "too early: back UP to " + s.target.Nominal.Entered + " and hold there"
		}
		return "hold at the top, " + s.target.Nominal.Entered
	case PointStep:
		return b.pointWords(s)
	}
	return "all points are taken; let it down"
}

func (b *Bench) zeroWords() string {
	switch {
	case !b.plan.ReferenceStreams():
		return "set " + b.nominalZero() + ", keep still, then press"
	case b.plan.Found != gauge.ByPress:
		return "let all of it out, open to the air, keep still"
	}
	return "let all of it out, open to the air, keep still, then press"
}

func (b *Bench) nominalZero() string {
	if b.plan.Low.Given() {
		return b.plan.Low.Entered
	}
	return "0 " + b.plan.High.Unit.Name
}

// pointWords sends the operator to a point.
func (b *Bench) pointWords(s step) string {
	way, other, beyond := "UP", "down", "below"
	if s.target.Direction == gauge.Down {
		way, other, beyond = "DOWN", "up", "above"
	}
	at := s.target.Nominal.Entered
	if b.mustGoBack(s) {
		back, _ := s.backTo()
		return fmt.Sprintf("gone past: back %s, %s %s, then %s to %s", other, beyond, b.show(back), strings.ToLower(way), at)
	}
	switch {
	case b.byRest(s):
		return fmt.Sprintf("%s to %s and rest there", way, at)
	case b.plan.Found == gauge.BySweep:
		return fmt.Sprintf("slowly %s through %s", way, at)
	case b.plan.Kind == gauge.Dial && s.target.Series == gauge.Tapped:
		return fmt.Sprintf("pointer %s to %s, tapping lightly, hold, press", way, at)
	case b.plan.Kind == gauge.Dial:
		return fmt.Sprintf("pointer %s to %s, no tapping, hold, press", way, at)
	}
	return fmt.Sprintf("%s to %s, hold, press", way, at)
}

// mustGoBack tells whether the point was surely passed. Of a dial nobody knows
// where its pointer stands, only that half the way to the next mark is too far.
func (b *Bench) mustGoBack(s step) bool {
	if b.approach.sign != signOf(s.target.Direction) || b.atEnd(s) {
		return false
	}
	past := b.approach.extreme - signOf(s.target.Direction)*s.target.Nominal.SI
	allowed := b.plan.WrongSide * b.plan.SpanSI()
	if !b.plan.IndicatedStreams() || b.plan.Found == gauge.BySweep {
		allowed = s.near / 2
	}
	return past > allowed
}

// away tells whether a board is lost.
func (b *Bench) away() bool {
	return slices.ContainsFunc(b.link, func(text string) bool { return text != "" })
}

package main

import (
	"fmt"
	"math"
	"strings"
	"time"

	"tautramp/analyze/gauge"
	"tautramp/cmd/tautramp/station"
)

// benchScreen draws a bench test's Status: what to do next and what became of a
// press stay, the figures are one line that is redrawn.
type benchScreen struct {
	*screen
	plan   gauge.Plan
	next   string
	answer station.Answer
	alarm  station.AlarmKind
	begun  bool
}

func newBenchScreen(e env, p gauge.Plan, factor float64) *benchScreen {
	return &benchScreen{screen: &screen{e: e, factor: factor, drawnAt: -time.Hour}, plan: p}
}

func (s *benchScreen) draw(now station.Status) {
	if now.Alarm != s.alarm {
		s.alarm = now.Alarm
		if now.Alarm != station.NoAlarm {
			s.line(s.loud(now.AlarmText))
		} else {
			s.line("alarm over")
		}
	}
	if now.Answer != s.answer {
		s.answer = now.Answer
		s.line(answerWords(now.Answer))
	}
	if now.Next != s.next {
		s.next = now.Next
		s.line(">> " + now.Next)
	}
	realGap := time.Duration(float64(now.At-s.drawnAt) / s.factor)
	if !s.redraws() && s.begun && realGap < plainEvery {
		return
	}
	s.begun, s.drawnAt = true, now.At
	if !s.redraws() {
		s.line(strings.Join(s.fields(now), "   "))
		return
	}
	fmt.Fprint(s.e.stderr, "\r\x1b[K"+s.paintBench(now))
	s.open = true
}

func answerWords(a station.Answer) string {
	if a.Refused {
		return "NOT TAKEN  " + a.Text
	}
	return "OK  " + a.Text
}

// paintBench is the line that is redrawn. In an alarm the reference stays in
// sight, for it must be seen to fall.
func (s *benchScreen) paintBench(now station.Status) string {
	if now.Alarm != station.NoAlarm {
		return "\a\x1b[7m" + s.cut("STOP  "+s.figure(now.NowSI)+"  let it down slowly") + "\x1b[0m"
	}
	fields := s.fields(now)
	for len(fields) > 1 && len(strings.Join(fields, "   ")) >= s.e.columns {
		fields = fields[:len(fields)-1]
	}
	return s.cut(strings.Join(fields, "   "))
}

// fields are the figures, the ones to go without last.
func (s *benchScreen) fields(now station.Status) []string {
	var fields []string
	for i, link := range now.Link {
		if link != "" {
			fields = append(fields, fmt.Sprintf("board %d %s", i+1, link))
		}
	}
	fields = append(fields, "NOW "+s.figure(now.NowSI))
	if left := now.GoSI - now.NowSI; now.Step == station.PointStep && math.Abs(left) >= s.tells(now) {
		fields = append(fields, s.togo(left))
	}
	if now.WaitS > 0 {
		fields = append(fields, fmt.Sprintf("hold %.0f s", math.Ceil(now.WaitS)))
	} else if now.Step == station.PointStep || now.Step == station.ZeroBefore || now.Step == station.ZeroAfter {
		fields = append(fields, "at rest")
	}
	fields = append(fields, s.where(now), fmt.Sprintf("%d of %d", now.Taken, now.Planned))
	if !math.IsNaN(now.TestedSI) {
		fields = append(fields, "shows "+s.figure(now.TestedSI))
	}
	if now.Lost > 0 || now.Rejected > 0 {
		fields = append(fields, fmt.Sprintf("lost %d, refused %d", now.Lost, now.Rejected))
	}
	return fields
}

// aboutShare is how near to a dial's mark the reference guides: nearer, the
// pointer alone does, for what is between the two is what is looked for.
const aboutShare = 0.05

// tells is from which distance on it is said how far to go.
func (s *benchScreen) tells(now station.Status) float64 {
	if s.plan.Kind == gauge.Dial && !now.Back {
		return aboutShare * s.plan.SpanSI()
	}
	return 0
}

// togo is how far to go, and which way.
func (s *benchScreen) togo(left float64) string {
	way := "up"
	if left < 0 {
		way = "down"
	}
	about := ""
	if s.plan.Kind == gauge.Dial {
		about = "about "
	}
	return about + s.figure(math.Abs(left)) + " " + way
}

// where is the step, with its series.
func (s *benchScreen) where(now station.Status) string {
	words := string(now.Step)
	switch {
	case now.Step == station.Exercise:
		words += fmt.Sprintf(" %d of %d", now.Cycle, now.Cycles)
	case now.Target.Series != "":
		words += ", " + string(now.Target.Series)
	}
	if s.plan.Repeats > 1 {
		words += fmt.Sprintf(", repeat %d", now.Target.Repeat+1)
	}
	if s.plan.Runs > 1 {
		words += fmt.Sprintf(", mounting %d", now.Target.Run+1)
	}
	return words
}

// figure writes a number in the plan's unit, to a thousandth of the range.
func (s *benchScreen) figure(si float64) string {
	unit := s.plan.High.Unit
	if math.IsNaN(si) {
		return "-- " + unit.Name
	}
	decimals := int(math.Ceil(-math.Log10(unit.FromSI(s.plan.SpanSI()) * 1.001e-3)))
	text := fmt.Sprintf("%.*f", min(max(decimals, 0), 6), unit.FromSI(si))
	if strings.Trim(text, "-0.") == "" {
		text = strings.TrimPrefix(text, "-")
	}
	return text + " " + unit.Name
}

func (s *benchScreen) end(sum station.Summary) {
	s.line(fmt.Sprintf("%s; points: %d of %d", sum.Reason, sum.Taken, sum.Planned))
}

// planWords tells a plan in a few lines.
func planWords(p gauge.Plan) []string {
	var points []string
	for _, q := range p.Points {
		points = append(points, q.Entered)
	}
	way := "up"
	if p.Down {
		way = "up and down"
	}
	about := fmt.Sprintf("%s: %s, %s", p.Name, strings.Join(points, ", "), way)
	if len(p.Series) > 0 {
		var series []string
		for _, one := range p.Series {
			series = append(series, string(one))
		}
		about += "; " + strings.Join(series, ", then ")
	}
	for _, n := range []struct {
		n    int
		word string
	}{{p.Repeats, "times"}, {p.Runs, "mountings"}} {
		if n.n > 1 {
			about += fmt.Sprintf("; %d %s", n.n, n.word)
		}
	}
	how := fmt.Sprintf("%d exercise cycles first; hold each for %g s", p.Exercise, p.SettleS)
	if p.TopHoldS > 0 {
		how += fmt.Sprintf(", the top for %g s", p.TopHoldS)
	}
	if p.Found != gauge.ByPress {
		how += "; nothing to press, points are found by themselves"
	}
	return []string{about, how}
}

// printTexts prints each text behind a head, wrapped.
func printTexts(head string, texts []string, e env) error {
	for _, text := range texts {
		for i, line := range wrap(text, 79-len(head)) {
			lead := head
			if i > 0 {
				lead = strings.Repeat(" ", len(head))
			}
			if _, err := fmt.Fprintln(e.stderr, lead+line); err != nil {
				return err
			}
		}
	}
	_, err := fmt.Fprintln(e.stderr)
	return err
}

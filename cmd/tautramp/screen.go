package main

import (
	"fmt"
	"math"
	"strings"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/recording"
	"tautramp/cmd/tautramp/visit"
)

// plainEvery is the real time between two lines where the output is no
// terminal.
const plainEvery = 2 * time.Second

// screen draws a visit's Status: one line that is redrawn on a terminal, a
// plain line now and then elsewhere. What the operator must read stays.
type screen struct {
	e       env
	system  mill.System
	role    mill.Role
	factor  float64
	next    string
	reply   visit.Reply
	limitSI float64
	phase   string
	mark    string
	alarm   visit.AlarmKind
	drawnAt time.Duration
	open    bool // an unfinished line stands on the terminal
}

func newScreen(e env, h recording.Header, system mill.System) *screen {
	s := &screen{e: e, system: system, role: mill.RolePressure, factor: h.ClockFactor, drawnAt: -time.Hour}
	if t, err := h.Parsed.FindTensioner(h.Tensioner); err == nil {
		s.role, s.limitSI = t.SettingRole(), t.SettingLimit.SI
	}
	return s
}

// draw shows one status. Lines that call for action come before the figures.
func (s *screen) draw(now visit.Status) {
	if now.Alarm != s.alarm {
		s.alarm = now.Alarm
		if now.Alarm != visit.NoAlarm {
			s.line(s.loud(now.AlarmText))
		} else {
			s.line("alarm over")
		}
	}
	if next := s.advice(now); next != s.next {
		s.next = next
		s.line(">> " + next)
	}
	if now.Reply.Kind != s.reply.Kind || now.Reply.At != s.reply.At {
		s.reply = now.Reply
		s.line(s.answer(now.Reply))
	}
	if now.Mark != s.mark {
		s.mark = now.Mark
		s.line("PRESS at " + now.Mark)
	}
	phase := fmt.Sprintf("%s %d", now.Phase, now.Cycle)
	realGap := time.Duration(float64(now.At-s.drawnAt) / s.factor)
	if !s.redraws() && phase == s.phase && realGap < plainEvery {
		return
	}
	s.phase, s.drawnAt = phase, now.At
	if !s.redraws() {
		s.line(s.figures(now))
		return
	}
	fmt.Fprint(s.e.stderr, "\r\x1b[K"+s.paint(now))
	s.open = true
}

func (s *screen) redraws() bool { return s.e.columns > 0 }

// paint is the line that is redrawn, cut to one row: a line that wraps cannot
// be taken back. In an alarm the gauge stays in sight, for it must be seen to
// fall.
func (s *screen) paint(now visit.Status) string {
	if now.Alarm == visit.NoAlarm {
		return s.cut(s.fitting(now))
	}
	text := "STOP  " + s.show(now.SettingSI, s.role, 0, "gauge") + "  release slowly"
	return "\a\x1b[7m" + s.cut(text) + "\x1b[0m"
}

func (s *screen) cut(text string) string {
	return text[:min(len(text), s.e.columns-1)]
}

// advice is what to do next, with the setting to stop at where it sends the
// operator up.
func (s *screen) advice(now visit.Status) string {
	if math.IsNaN(now.GoalSI) {
		return now.Next
	}
	return fmt.Sprintf("%s (to about %s; limit %s)", now.Next, s.show(now.GoalSI, s.role, -1, "gauge"), s.show(s.limitSI, s.role, 0, "gauge"))
}

// answer says what became of a key.
func (s *screen) answer(r visit.Reply) string {
	text := string(r.Kind)
	if r.Kind == visit.MarkTaken {
		text = fmt.Sprintf("mark %d taken", r.Number)
		if r.Mark != "" {
			text = r.Mark + " taken"
		}
	}
	if math.IsNaN(r.SettingSI) {
		return "key: " + text
	}
	return "key: " + text + ", at " + s.show(r.SettingSI, s.role, 0, "gauge")
}

func (s *screen) loud(text string) string {
	if s.redraws() {
		return "\a\x1b[7m*** STOP *** " + text + "\x1b[0m"
	}
	return "*** STOP *** " + text
}

// line prints a line of its own, after ending the one that is being redrawn.
func (s *screen) line(text string) {
	if s.open {
		fmt.Fprint(s.e.stderr, "\r\x1b[K")
		s.open = false
	}
	width := s.e.columns - 1
	if !s.redraws() {
		width = len(text) + 1
	}
	for _, line := range wrap(text, width) {
		fmt.Fprintln(s.e.stderr, line)
	}
}

func (s *screen) figures(now visit.Status) string { return strings.Join(s.fields(now), "  ") }

// fitting is as many whole figures as stand in one row: half a number misleads.
func (s *screen) fitting(now visit.Status) string {
	fields := s.fields(now)
	for len(fields) > 1 && len(strings.Join(fields, "  ")) >= s.e.columns {
		fields = fields[:len(fields)-1]
	}
	return strings.Join(fields, "  ")
}

// fields are the figures, the ones to go without last.
func (s *screen) fields(now visit.Status) []string {
	cycle := fmt.Sprintf("cycle %d", now.Cycle)
	if now.Planned > 0 {
		cycle += fmt.Sprintf(" of %d", now.Planned)
	}
	if now.Exercise {
		cycle += " (exercise)"
	}
	var fields []string
	for i, link := range now.Link {
		if link != "" {
			fields = append(fields, fmt.Sprintf("board %d %s", i+1, link))
		}
	}
	fields = append(fields,
		s.show(now.SettingSI, s.role, 0, "gauge"),
		s.show(now.StressPa, mill.RoleStress, -2, "band"),
		s.show(now.RateSI, s.role, 1, "")+"/s",
		string(now.Phase), cycle,
		"stretch "+s.show(now.StretchM, mill.RoleExtension, 5, ""))
	if now.Lost > 0 || now.Rejected > 0 {
		fields = append(fields, fmt.Sprintf("lost %d, refused %d", now.Lost, now.Rejected))
	}
	return fields
}

// show writes one number for the screen in US digits: decimals below zero
// round to tens and hundreds; SI units get what keeps the same step.
func (s *screen) show(si float64, role mill.Role, usDecimals int, word string) string {
	unit := s.system.Unit(role)
	text := "--"
	if !math.IsNaN(si) {
		decimals := usDecimals
		if s.system == mill.SI {
			step := s.system.Unit(role).FromSI(mill.US.Unit(role).ToSI(math.Pow(10, float64(-usDecimals))))
			decimals = int(math.Ceil(-math.Log10(step)))
		}
		value := unit.FromSI(si)
		if decimals < 0 {
			step := math.Pow(10, float64(-decimals))
			value, decimals = math.Round(value/step)*step, 0
		}
		text = fmt.Sprintf("%.*f", decimals, value+0) // +0 turns -0 into 0
	}
	return strings.Join(strings.Fields(text+" "+word+" "+unit.Name), " ")
}

// end closes the line and says how the visit ended.
func (s *screen) end(sum visit.Summary) {
	s.line(fmt.Sprintf("%s; cycles closed: %d", sum.Reason, sum.Cycles))
}

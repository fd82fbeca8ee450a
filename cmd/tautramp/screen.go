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
	phase   string
	alarm   visit.AlarmKind
	drawnAt time.Duration
	open    bool // an unfinished line stands on the terminal
}

func newScreen(e env, h recording.Header, system mill.System) *screen {
	s := &screen{e: e, system: system, role: mill.RolePressure, factor: h.ClockFactor, drawnAt: -time.Hour}
	if t, err := h.Parsed.FindTensioner(h.Tensioner); err == nil {
		s.role = t.SettingRole()
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
	if now.Next != "" && now.Next != s.next {
		s.next = now.Next
		s.line(">> " + now.Next)
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
		return s.cut(s.figures(now))
	}
	text := "STOP  " + s.show(now.SettingSI, s.role, 0, "gauge") + "  release slowly"
	return "\a\x1b[7m" + s.cut(text) + "\x1b[0m"
}

func (s *screen) cut(text string) string {
	return text[:min(len(text), s.e.columns-1)]
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
	fmt.Fprintln(s.e.stderr, text)
}

func (s *screen) figures(now visit.Status) string {
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
	return strings.Join(fields, "  ")
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
	s.line(fmt.Sprintf("%s; %d cycles closed", sum.Reason, sum.Cycles))
}

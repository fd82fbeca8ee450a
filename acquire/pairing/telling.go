package pairing

import (
	"fmt"
	"strings"

	"tautramp/acquire/recording"
)

// telling collects what the host says of the visit as a whole: how it ended,
// and what it had to shout on the way.
type telling struct {
	alarms []Mark
	closed string // cycles that were closed, as last counted; "" before the first
	ended  string
	whole  bool // the plan was closed: what comes after takes nothing from it
}

// event takes a host event that is no mark.
func (l *telling) event(e recording.Entry, plan recording.Plan) {
	switch text := strings.TrimSpace(e.Event.Text); e.Event.Kind {
	case recording.Alarm:
		l.alarms = append(l.alarms, Mark{T: e.At.Seconds(), Kind: Alarm, Text: text})
	case recording.CycleEnd:
		l.closed = text
	case recording.PlanClosed:
		l.whole, l.ended = true, "all planned cycles were closed"
	case recording.Interrupt:
		l.end("stopped by the operator"+l.after(plan), "")
	case recording.Abandoned:
		l.end("given up by the program"+l.after(plan), text)
	}
}

func (l *telling) end(how, why string) {
	if l.whole {
		return
	}
	if l.ended = how; why != "" {
		l.ended += ": " + why
	}
}

// after is how far the visit had come. Without a number of ramps there was no
// plan to fall short of.
func (l *telling) after(plan recording.Plan) string {
	closed := l.closed
	if closed == "" {
		closed = "0"
	}
	if plan.Ramps > 0 {
		return fmt.Sprintf(" after %s of %d cycles", closed, plan.Exercise+plan.Ramps)
	}
	if closed == "1" {
		return " after 1 cycle"
	}
	return fmt.Sprintf(" after %s cycles", closed)
}

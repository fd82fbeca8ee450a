package pairing

import (
	"cmp"
	"slices"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// longPressS is how long a button is held to take the last press back (SPEC
// of the recording, 5.6).
const longPressS = 1.5

// marks collects what the operator said. A nil *marks keeps nothing.
type marks struct {
	all     []pendingMark
	presses recording.Presses
}

// pendingMark is a mark at a host time, or at a tick whose host time is known
// only when the segment is.
type pendingMark struct {
	mark Mark
	seg  *segment
	tick int64
}

// button takes an edge. Where presses are declared, one that is held for long
// takes itself back and the press before it.
func (m *marks) button(r protocol.Button, seg *segment, tick int64) {
	if m == nil || seg == nil {
		return
	}
	id := string(rune(r.ID))
	if r.Down {
		m.all = append(m.all, pendingMark{mark: Mark{Kind: Button, Text: id}, seg: seg, tick: tick})
		return
	}
	if m.presses.As == "" {
		return
	}
	last := len(m.all) - 1
	if last < 0 || m.all[last].seg != seg || m.all[last].mark.Text != id || !isLong(seg, m.all[last].tick, tick) {
		return
	}
	m.all = m.all[:last]
	m.undo()
}

// isLong tells whether a button was held for long, by its device's clock.
func isLong(seg *segment, down, up int64) bool { return float64(up-down) >= longPressS*seg.hz }

// undo takes back the last mark of any kind.
func (m *marks) undo() { m.all = m.all[:max(0, len(m.all)-1)] }

// event takes a host event.
func (m *marks) event(e recording.Entry) {
	if m == nil {
		return
	}
	switch e.Event.Kind {
	case recording.Mark:
		m.host(e, Operator)
	case recording.ZeroMark:
		m.host(e, Zero)
	case recording.Undo:
		m.undo()
	}
}

func (m *marks) host(e recording.Entry, kind MarkKind) {
	m.all = append(m.all, pendingMark{mark: Mark{T: e.At.Seconds(), Kind: kind, Text: e.Event.Text}})
}

// at is the mark on the host timeline, as its clock is known now.
func (p pendingMark) at() float64 {
	if p.seg == nil {
		return p.mark.T
	}
	return p.seg.at(p.tick)
}

// pressed counts the presses that stand.
func (m *marks) pressed() int {
	n := 0
	for _, p := range m.all {
		if p.mark.Kind != Zero {
			n++
		}
	}
	return n
}

// placed returns the marks in time order. Presses take what is declared in the
// order in which they were recorded.
func (m *marks) placed() []Mark {
	var out []Mark
	pressed := 0
	for _, p := range m.all {
		p.mark.T = p.at()
		if n := len(m.presses.Marks); n > 0 && p.mark.Kind != Zero {
			p.mark.As, p.mark.Declared = m.presses.As, m.presses.Marks[pressed%n]
			pressed++
		}
		out = append(out, p.mark)
	}
	slices.SortStableFunc(out, func(a, b Mark) int { return cmp.Compare(a.T, b.T) })
	return out
}

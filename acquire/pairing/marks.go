package pairing

import (
	"slices"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// marks collects what the operator said. A nil *marks keeps nothing.
type marks struct{ all []pendingMark }

// pendingMark is a mark at a host time, or at a tick whose host time is known
// only when the segment is.
type pendingMark struct {
	mark Mark
	seg  *segment
	tick int64
}

// button takes a press; a release says nothing.
func (m *marks) button(r protocol.Button, seg *segment, tick int64) {
	if m == nil || seg == nil || !r.Down {
		return
	}
	m.all = append(m.all, pendingMark{mark: Mark{Kind: Button, Text: string(rune(r.ID))}, seg: seg, tick: tick})
}

// event takes a host event; an undo takes back the last mark of any kind.
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
		m.all = m.all[:max(0, len(m.all)-1)]
	}
}

func (m *marks) host(e recording.Entry, kind MarkKind) {
	m.all = append(m.all, pendingMark{mark: Mark{T: e.At.Seconds(), Kind: kind, Text: e.Event.Text}})
}

// placed returns the marks in time order.
func (m *marks) placed() []Mark {
	var out []Mark
	for _, p := range m.all {
		if p.seg != nil {
			p.mark.T = p.seg.at(p.tick)
		}
		out = append(out, p.mark)
	}
	slices.SortStableFunc(out, func(a, b Mark) int {
		switch {
		case a.T < b.T:
			return -1
		case a.T > b.T:
			return 1
		}
		return 0
	})
	return out
}

package visit

import (
	"bytes"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// How long a switch is pressed, in seconds of the recording.
const (
	longPress = 1500 * time.Millisecond // takes the last mark back, as recording SPEC 5.6 has it
	heldPress = 4 * time.Second         // aborts: a foot or a hand that does not let go
	heldReal  = time.Second             // and lasts as long in life: a fast rehearsal's board may be late to say that it was let go
)

// hold is a press on a board's own button. The wire tells its edges; it is a mark
// at once, as the analysis has it, and what the press becomes when it lasts
// takes that mark back again. Where the header says what presses stand for, a
// reader of the recording does so by itself.
type hold struct {
	down  bool
	since time.Duration
	spent bool // it has aborted
}

// button takes an edge of a board's button.
func (w *watch) button(wire []byte) []recording.Event {
	if !bytes.HasPrefix(wire, []byte("btn ")) {
		return nil
	}
	r, bad := protocol.Parse(wire)
	b, ok := r.(protocol.Button)
	if !ok || bad != nil {
		return nil
	}
	if b.Down {
		w.press = hold{down: true, since: w.now}
		w.answer(MarkTaken, w.tracker.zero.markPlain())
		return nil
	}
	long := w.press.down && !w.press.spent && w.now-w.press.since >= longPress
	w.press = hold{}
	if !long {
		return nil
	}
	if w.cfg.Header.Presses.As != "" { // the reader takes both back
		w.tracker.zero.undo()
		w.answer(w.tracker.zero.undo(), 0)
		return nil
	}
	return w.takeBack("long press: its own mark", "long press")
}

// held aborts once when a button stays down.
func (w *watch) held() []recording.Event {
	least := max(heldPress, time.Duration(float64(heldReal)*w.factor))
	if !w.press.down || w.press.spent || w.now-w.press.since < least {
		return nil
	}
	w.press.spent = true
	return append(w.takeBack("held: its own mark"), recording.Event{Kind: recording.Abort, Text: "held switch"})
}

func (w *watch) takeBack(why ...string) []recording.Event {
	if w.cfg.Header.Presses.As != "" {
		return nil
	}
	var out []recording.Event
	for _, text := range why {
		out = append(out, recording.Event{Kind: recording.Undo, Text: text})
	}
	return out
}

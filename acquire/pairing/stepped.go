package pairing

import (
	"fmt"
	"math"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// Where no channel measures the setting, it is known at the presses alone: a
// press says that the next step of a declared series is reached. Between two
// presses somebody turns, and the setting may be anything; so pairs are made of
// the readings just before a press, while the extension stood still, and of no
// others. All readings of a press share one error of the setting.
const (
	stepHoldS = 1.0 // before a press, that its readings may come from
	stepPairs = 5   // at most, of one press: more would only repeat its error
)

// steps is what the declared series says, SI.
type steps struct {
	si  []float64
	std float64 // standard uncertainty of each
}

// stepsOf reads the series; ok is false where the recording has none.
func stepsOf(h recording.Header) (s steps, ok bool, err error) {
	if h.Presses.As != recording.PressStep {
		return s, false, nil
	}
	s.si, s.std, err = h.Presses.Steps()
	if err != nil {
		return s, true, fmt.Errorf("%w: the declared steps: %w", ErrNoSetting, err)
	}
	return s, true, nil
}

// channel is the setting as a channel: one reading at each press, held until
// the next.
func (s steps) channel(quantity protocol.Quantity, marks []Mark) Channel {
	c := Channel{Device: -1, Spec: protocol.Chan{Quantity: quantity}, CountSI: s.std * math.Sqrt(12)}
	n := 0
	for _, m := range marks {
		if m.As == recording.PressStep {
			c.Readings = append(c.Readings, Reading{T: m.T, Value: s.si[n%len(s.si)], Status: protocol.Good})
			n++
		}
	}
	return c
}

// joinSteps makes the pairs of each press.
func (set *Set) joinSteps(s steps) {
	e, before := set.Extension.Readings, math.Inf(-1)
	for _, press := range set.Setting.Readings {
		last := len(e) - 1
		for last >= 0 && (e[last].T > press.T || !e[last].Status.Ok()) {
			last--
		}
		if last < 0 || e[last].T <= max(before, press.T-stepHoldS) {
			set.Unpaired++
			continue
		}
		near := s.held(e[:last+1], max(before, press.T-stepHoldS), 1.5*set.Extension.CountSI)
		before = press.T
		for _, r := range near {
			set.Pairs = append(set.Pairs, Pair{T: r.T, Setting: press.Value, Extension: r.Value,
				SettingStd: s.std * math.Sqrt(float64(len(near))), Part: r.Part})
		}
	}
}

// held are the last readings, after a time, that stay close to the last one.
func (s steps) held(e []Reading, after, within float64) []Reading {
	last := e[len(e)-1]
	first := len(e) - 1
	for first > 0 && len(e)-first < stepPairs {
		r := e[first-1]
		if r.T <= after || !r.Status.Ok() || r.Part != last.Part || math.Abs(r.Value-last.Value) > within {
			break
		}
		first--
	}
	return e[first:]
}

// Live pairs hold the setting from press to press, to have something to show;
// the file's are fewer (see above).

// step is the setting that the presses have reached; ok is false before the
// first.
func (l *Live) step() (si float64, ok bool) {
	n := l.in.marks.pressed()
	if n == 0 {
		return 0, false
	}
	s := l.chosen.steps.si
	return s[(n-1)%len(s)], true
}

// settleSteps pairs a reading of the extension with the step that is held.
func (l *Live) settleSteps(h held) []Pair {
	l.out = l.out[:0]
	si, ok := l.step()
	if !ok {
		return nil
	}
	r := h.placed()
	l.latest[0] = Reading{T: r.T, Value: si, Status: protocol.Good, Part: r.Part}
	if !r.Status.Ok() || r.T <= l.lastT {
		return nil
	}
	l.lastT = r.T
	l.out = append(l.out, Pair{T: r.T, Setting: si, Extension: r.Value, SettingStd: l.chosen.steps.std, Part: r.Part})
	return l.out
}

// Presses tells how many presses stand, and what the next one stands for: ""
// where nothing is declared.
func (l *Live) Presses() (standing int, next string) {
	declared := l.header.Presses.Marks
	if len(declared) == 0 {
		return 0, ""
	}
	n := l.in.marks.pressed()
	return n, declared[n%len(declared)]
}

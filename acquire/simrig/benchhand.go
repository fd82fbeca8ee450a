package simrig

import "math"

// hand is the operator: a list of moves, one after the other.
type hand struct {
	moves []move
	at    int
	sS    float64 // s into the move
	from  float64 // what was seen when it began
	away  bool    // the board is not connected
	backS float64 // s to wait before going on, after it was away
	again bool    // and press then
}

// moveKind is one thing that a hand does.
type moveKind int

const (
	goTo moveKind = iota
	stay
	pressIt
)

type move struct {
	kind    moveKind
	toSI    float64 // goTo
	blind   bool    // goTo: by what is true, not by the pointer
	rateSI  float64 // goTo: at most, SI/s
	tapping bool
	forS    float64 // stay; pressIt: held for so long
	series  int     // index of the first move of its series; -1 before any
}

func (m move) while(tapping bool) move { m.tapping = tapping; return m }

// Times of an operator, s. Judgement.
const (
	crossS    = 12.0 // from end to end of the range
	easeS     = 0.6  // the last bit of the way takes a few of these
	marginS   = 1.5  // longer than asked for
	pressS    = 0.25
	longS     = 2.0
	comeBackS = 8.0
	mountS    = 20.0
)

// script collects moves.
type script struct {
	b      *bench
	moves  []move
	series int
}

func newHand(b *bench) hand {
	s := &script{b: b, series: -1}
	s.stay(b.WarmUpS + 1)
	for run := range b.Runs {
		if run > 0 {
			s.rest()
			s.stay(mountS)
			s.press(pressS)
		}
		for range b.Exercise {
			s.add(move{toSI: b.HighSI, blind: true})
			s.stay(2)
			s.rest()
			s.stay(1)
		}
		for range b.Repeats {
			for i, tapped := range b.Tapped {
				s.leg(tapped, run == 0 && i == 0 && s.series < 0)
			}
		}
	}
	return hand{moves: s.moves}
}

func (s *script) add(m move) {
	m.series = s.series
	if m.rateSI == 0 {
		m.rateSI = (s.b.HighSI - s.b.LowSI) / crossS
	}
	s.moves = append(s.moves, m)
}

func (s *script) stay(forS float64) { s.add(move{kind: stay, forS: forS}) }
func (s *script) rest()             { s.add(move{toSI: s.b.restSI(), blind: true}) }

func (s *script) press(forS float64) {
	if s.b.Way == BenchPresses || s.b.Way == "" {
		s.add(move{kind: pressIt, forS: forS})
		s.stay(0.5)
	}
}

// settled holds for as long as is asked for, and a little longer.
func (s *script) settled() { s.stay(s.b.SettleS + s.b.WindowS + marginS) }

// leg is one series: zero, up, hold, down, zero.
func (s *script) leg(tapped, slips bool) {
	s.series = len(s.moves)
	s.zero()
	if s.b.Way == BenchSweeps {
		s.sweep()
		return
	}
	points := s.b.Points
	for i := range points {
		var slip Slip
		if n := i / 2; slips && i%2 == 1 && n < len(s.b.Slips) {
			slip = s.b.Slips[n]
		}
		s.point(i, +1, tapped, slip)
	}
	if s.b.Down {
		s.stay(s.b.TopHoldS + marginS)
		for i := len(points) - 2; i >= 0; i-- {
			s.point(i, -1, tapped, "")
		}
	}
	s.zero()
}

func (s *script) zero() {
	s.rest()
	s.settled()
	s.press(pressS)
}

// point goes to a point and marks it, with a slip or without.
func (s *script) point(i, way int, tapped bool, slip Slip) {
	at, step := s.mark(i), s.step(i)*float64(way)
	to := func(si float64) { s.add(move{toSI: si}.while(tapped)) }
	again := func() {
		s.add(move{toSI: s.b.Points[i] - 0.7*step, blind: true})
		to(at)
		s.settled()
		s.press(pressS)
	}
	if slip == SlipSide {
		to(at + 0.3*step)
	}
	to(at)
	switch slip {
	case SlipEarly:
		s.stay(1)
		s.press(pressS)
	case SlipLate:
		s.settled()
		s.add(move{toSI: at + 0.2*step})
		s.press(pressS)
		again()
		return
	}
	s.settled()
	s.press(pressS)
	switch slip {
	case SlipSide:
		again()
	case SlipTwice:
		s.add(move{kind: pressIt, forS: pressS})
		s.stay(1)
	case SlipUndo:
		s.press(longS)
		s.settled()
		s.press(pressS)
	}
}

// mark is where the hand brings the pointer for a point.
func (s *script) mark(i int) float64 { return s.b.Points[i] + s.b.ReadSI*s.b.rng.NormFloat64() }

// step is the distance to the point below, or above the first.
func (s *script) step(i int) float64 {
	if i == 0 {
		return s.b.Points[1] - s.b.Points[0]
	}
	return s.b.Points[i] - s.b.Points[i-1]
}

// sweep goes through all points at a walk and back.
func (s *script) sweep() {
	slow := 0.1 * s.step(1) / s.b.WindowS
	span := s.b.HighSI - s.b.LowSI
	s.add(move{toSI: s.b.HighSI + 0.03*span, blind: true, rateSI: slow})
	s.stay(s.b.TopHoldS + marginS)
	if s.b.Down {
		s.add(move{toSI: s.b.restSI(), blind: true, rateSI: slow})
	}
	s.zero()
}

// step does the next dt seconds and returns the rate of the true value.
func (h *hand) step(b *bench, dt float64) float64 {
	if !b.linked() {
		return h.alone(b)
	}
	if h.away {
		h.comeBack(b)
	}
	if h.backS > 0 {
		h.backS -= dt
		if h.backS <= 0 && h.again {
			b.press()
			h.again = false
			h.backS = pressS
		}
		return 0
	}
	b.release()
	for h.at < len(h.moves) {
		m := h.moves[h.at]
		if h.sS == 0 {
			h.from = h.sees(m, b)
		}
		rate, done := h.do(m, b)
		if !done {
			h.sS += dt
			return rate
		}
		h.at, h.sS = h.at+1, 0
	}
	return 0
}

func (h *hand) sees(m move, b *bench) float64 {
	if m.blind {
		return b.trueSI
	}
	return b.steersBy()
}

// do is one instant of a move.
func (h *hand) do(m move, b *bench) (rate float64, done bool) {
	switch m.kind {
	case stay:
		return 0, h.sS >= m.forS
	case pressIt:
		if h.sS == 0 {
			b.press()
		}
		b.pressed = h.sS < m.forS
		return 0, h.sS >= m.forS
	}
	left := m.toSI - h.sees(m, b)
	way := math.Copysign(1, m.toSI-h.from)
	near := 2e-5 * (b.HighSI - b.LowSI)
	if left*way <= near {
		return 0, true
	}
	return way * min(m.rateSI, max(math.Abs(left)/easeS, near)), false
}

// tapping tells whether the hand taps the instrument now.
func (h *hand) tapping() bool { return h.at < len(h.moves) && h.moves[h.at].tapping }

// alone is what happens while the board is not connected.
func (h *hand) alone(b *bench) float64 {
	h.away = true
	b.release()
	if b.Alone == AloneLetsDown && b.trueSI > b.restSI() {
		return -min((b.HighSI-b.LowSI)/crossS, (b.trueSI-b.restSI())/benchStepS)
	}
	return 0
}

// comeBack goes on after the board was away.
func (h *hand) comeBack(b *bench) {
	h.away = false
	if b.t < comeBackS || h.at == 0 { // it was never there before
		return
	}
	h.backS, h.sS = comeBackS+b.SettleS+b.WindowS, 0
	if b.Alone == AloneLetsDown {
		if s := h.moves[h.at].series; s >= 0 {
			h.at = s
		}
		return
	}
	h.again = h.at > 0 && h.at < len(h.moves) && h.moves[h.at].series >= 0
}

func (h *hand) over() bool { return h.at == len(h.moves) }

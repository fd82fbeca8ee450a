package analyze

// Turn is the kind of a turning point. The zero value is none.
type Turn int

// The kinds of turning point.
const (
	NoTurn Turn = iota
	Top
	Bottom
)

// Turner finds turning points as values come in: a running extreme is kept, and
// confirmed as a turning point once the series has come back from it by more
// than the dead band (the discretisation step of ASTM E1049 practice). The
// turning point is the extreme itself, not the sample that confirmed it; of
// equal extremes it is the first. Make one with NewTurner.
type Turner struct {
	band    float64
	n       int
	seeking Turn // kind of the extreme being followed; NoTurn before the first move
	low     extreme
	high    extreme
	started bool
}

type extreme struct {
	value float64
	at    int
}

// NewTurner needs a dead band larger than the noise from peak to peak, in the
// unit of the values.
func NewTurner(band float64) *Turner { return &Turner{band: band} }

// Add takes the next value. ok is true when it confirms an extreme, whose index
// (of the values added, from 0) and kind are returned. The start of the series
// is no extreme. A value that is not a number is counted and passed over.
func (t *Turner) Add(x float64) (index int, kind Turn, ok bool) {
	now := extreme{x, t.n}
	t.n++
	if x != x {
		return 0, NoTurn, false
	}
	if !t.started {
		t.low, t.high, t.started = now, now, true
		return 0, NoTurn, false
	}
	if x < t.low.value {
		t.low = now
	}
	if x > t.high.value {
		t.high = now
	}
	switch {
	case t.seeking != Bottom && x < t.high.value-t.band:
		index, ok = t.high.at, t.seeking == Top
		kind, t.seeking, t.low = Top, Bottom, now
	case t.seeking != Top && x > t.low.value+t.band:
		index, ok = t.low.at, t.seeking == Bottom
		kind, t.seeking, t.high = Bottom, Top, now
	}
	if !ok {
		return 0, NoTurn, false
	}
	return index, kind, true
}

// last is the extreme followed now, not yet confirmed; ok is false before the
// first move.
func (t *Turner) last() (index int, ok bool) {
	switch t.seeking {
	case Top:
		return t.high.at, true
	case Bottom:
		return t.low.at, true
	}
	return 0, false
}

// Turning is the indexes of the turning points of x: its first point, each
// confirmed extreme, and the last extreme, confirmed or not. A series that
// never leaves the dead band has its first point only; an empty one, none.
func Turning(x []float64, band float64) []int {
	if len(x) == 0 {
		return nil
	}
	t := NewTurner(band)
	points := []int{0}
	for _, v := range x {
		if i, _, ok := t.Add(v); ok {
			points = append(points, i)
		}
	}
	if i, ok := t.last(); ok && i != 0 {
		points = append(points, i)
	}
	return points
}

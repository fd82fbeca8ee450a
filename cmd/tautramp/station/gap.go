package station

import (
	"fmt"
	"math"

	"tautramp/acquire/recording"
)

// gap is a time without readings: what leads stood at lastX before it. What
// happened meanwhile only shows in where it stands after.
type gap struct {
	lastX  float64
	tooOld bool // so long that where it stands now proves nothing
}

// longestGapS is how long a test may stand and still go on in the middle of a
// series. Judgement.
const longestGapS = 600.0

func (b *Bench) beginGap(lastV float64) {
	if b.gap == nil {
		b.gap = &gap{lastX: lastV - b.baseSI}
	}
}

// closeGap compares before and after once there are readings again; it tells
// whether the gap is closed. On a rise what leads must not stand lower than
// before, on a fall not higher: else it may have been anywhere.
func (b *Bench) closeGap() bool {
	if !b.lead().settled() {
		return false
	}
	g, x := b.gap, b.x()
	b.gap, b.begunAt = nil, nan()
	if !b.inSeries() {
		b.swung = false
		return true
	}
	sign := signOf(b.step().target.Direction)
	back := sign * (g.lastX - x)
	switch {
	case b.step().kind == ZeroAfter: // the points are all there
	case g.tooOld:
		b.restartSeries("too long without readings: the series starts again; let it down first")
	case back > b.plan.WrongSide*b.plan.SpanSI() || math.IsNaN(back):
		b.restartSeries(fmt.Sprintf("%s stood at %s and stands at %s now: it has gone back meanwhile, the series starts again", b.leadName(), b.show(g.lastX), b.show(x)))
	default:
		b.reply(fmt.Sprintf("readings are back; %s has not gone back: the test goes on", b.leadName()), false)
		b.out = append(b.out, recording.Event{Kind: recording.Prompted, Text: b.answer.Text})
	}
	return true
}

// Continue goes on with the recording that continues the last one. seal is of
// the last one. The error wraps ErrNotNext.
func (b *Bench) Continue(h recording.Header, seal string) error {
	switch {
	case h.Bench == nil:
		return ErrNotBench
	case h.Continues != seal:
		return fmt.Errorf("%w: it continues another file, or the earlier one was changed since", ErrNotNext)
	case h.Bench.Plan != b.about.Plan:
		return fmt.Errorf("%w: it follows another plan", ErrNotNext)
	}
	lastV := nan()
	if l := b.lead(); l != nil {
		_, lastV = l.now()
	}
	wallS := h.Started.Sub(b.first.Started).Seconds()
	standing := wallS - b.now
	if b.factor != 1 || standing < 0 {
		standing = 0 // a rehearsal's hours pass on no wall
	}
	b.offset = b.now + standing
	for _, l := range b.trails {
		l.clear()
	}
	b.down, b.pending = map[byte]float64{}, nil
	b.gap = nil
	b.beginGap(lastV)
	b.gap.tooOld = standing > longestGapS
	b.open(h)
	b.guard.gap()
	return nil
}

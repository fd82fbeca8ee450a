package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// ZeroMarks is what became of the operator's zero marks.
type ZeroMarks struct {
	Given  int
	Used   int // some cycle has its zero from them
	Agree  int // not needed: the slack band was seen, and says the same
	Differ int // not used: the slack band was seen, and says otherwise
	Loaded int // not used: the stretch stood higher than a slack band's can
	Unread int // not used: no readings about them
}

// why says what stood against the marks where no zero came of them.
func (m zeroMarks) why() string {
	switch {
	case m.Given == 0:
		return "nobody marked the zero"
	case m.Loaded > 0:
		return "the zero was marked with the band loaded"
	}
	return "there are no readings about the zero mark"
}

// zeroMarks is the marks that hold, and the tally of all.
type zeroMarks struct {
	ZeroMarks
	holds []markedZero // that a zero was needed of
	all   []markedZero // on a slack band, needed or not
}

type markedZero struct {
	t    float64
	zero estimate.Estimate
}

// judgeMarks looks at each zero mark of the operator. A mark on a loaded band
// is none: it holds where the extension is below that of every seated band, or
// as low as the record goes, to within what the count and noise hide.
func (w *work) judgeMarks() {
	most := math.Max(w.lowestSeated(), w.lowestLevel()+w.stillM())
	for _, m := range w.set.Marks {
		if m.Kind != pairing.Zero {
			continue
		}
		w.marks.Given++
		zero := w.extensionAbout(m.T)
		if zero.Known() && zero.Value <= most {
			w.marks.all = append(w.marks.all, markedZero{m.T, zero})
		}
		slack := w.nearestSlack(m.T, false)
		switch {
		case !zero.Known():
			w.marks.Unread++
		case slack.Known() && math.Abs(slack.Value-zero.Value) <= w.stillM():
			w.marks.Agree++
		case zero.Value > most:
			w.marks.Loaded++
		case slack.Known():
			w.marks.Differ++
		default:
			w.marks.Used++
			w.marks.holds = append(w.marks.holds, markedZero{m.T, zero})
		}
	}
	w.res.Marks = w.marks.ZeroMarks
}

// markedZero is the operator's zero nearest in time.
func (w *work) markedZero(t float64) (zero estimate.Estimate) { return w.nearestMark(w.marks.holds, t) }

// markedBy is markedZero of all marks on a slack band, needed or not.
func (w *work) markedBy(t float64) (zero estimate.Estimate) { return w.nearestMark(w.marks.all, t) }

func (w *work) nearestMark(marks []markedZero, t float64) (zero estimate.Estimate) {
	gap := math.Inf(1)
	for _, m := range marks {
		if math.Abs(m.t-t) < gap && !w.slipped(m.t, t) {
			gap, zero = math.Abs(m.t-t), m.zero
		}
	}
	return zero
}

// extensionAbout is the extension within a second of t.
func (w *work) extensionAbout(t float64) estimate.Estimate {
	const about = 1.0 // s
	var e []float64
	for i, at := range w.t {
		if math.Abs(at-t) <= about {
			e = append(e, w.e[i])
		}
	}
	if len(e) < 3 {
		return estimate.Unknown("no readings about the mark")
	}
	_, sd := estimate.Mean(e)
	return estimate.Estimate{
		Value: estimate.Median(e), Random: sd / math.Sqrt(float64(len(e))), DoF: float64(len(e) - 1),
		Method: "extension at the operator's zero mark",
	}
}

// lowestLevel is the lowest extension of the record, m; of three readings
// together, so that one bad one does not make it.
func (w *work) lowestLevel() float64 { return w.lowestM(0, len(w.e)-1) }

// lowestM is the same of the pairs from first to last.
func (w *work) lowestM(first, last int) float64 {
	low := math.Inf(1)
	for i := first + 2; i <= last; i++ {
		low = math.Min(low, estimate.Median(w.e[i-2:i+1]))
	}
	return low
}

// lowestSeated is the lowest extension at which a band was seated, m.
func (w *work) lowestSeated() float64 {
	low := math.Inf(1)
	for i := range w.legs {
		if w.legs[i].ok {
			low = math.Min(low, w.legs[i].seatEndM)
		}
	}
	return low
}

// warnMarks says which of the operator's marks were not used.
func (w *work) warnMarks() {
	m := w.marks.ZeroMarks
	for _, c := range []struct {
		n   int
		why string
	}{
		{m.Loaded, "the stretch stood higher there than a slack band's does"},
		{m.Unread, "there are no readings of the stretch about them"},
		{m.Differ, "the slack band itself was seen, and stands elsewhere"},
	} {
		if c.n > 0 {
			w.warn("zero-mark-unused", fmt.Sprintf("%d of %d zero marks not used: %s.", c.n, m.Given, c.why))
		}
	}
}

package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// Dial is the mill's own dial against the instrument that measured the
// setting: cards are read on it when that has left. The zero value is no dial:
// the settings hold for the instrument only.
type Dial struct {
	Name       string
	Unit       string  // "psi", or mill.Divisions for bare numbers; "" where no press is of a dial
	Graduation float64 // from mark to mark, in its unit; 0: not known
	Presses    []DialPress
	Rising     DialLine
	Falling    DialLine
	AtRising   DialSetting // the target's setting, as the dial shows it
	AtFalling  DialSetting
}

// DialPress is one moment at which the pointer stood on a mark.
type DialPress struct {
	T         float64
	Reading   float64 // in the dial's unit
	SettingSI float64
	MovedSI   float64 // by how far the setting moved on while a hand reacts
	Direction Direction
	Cycle     int
}

// DialLine is the dial's reading, in its unit, on the setting, SI, one way. It
// is known where Line.N is above 0; else Why says why the settings of that way
// hold for the instrument only.
type DialLine struct {
	Line          estimate.Line
	SpreadDoF     float64 // of Line's covariance; +Inf where the pointer's assumed doubt is the larger
	LateStd       float64 // in the dial's unit, common to all presses: a hand reacts late
	LowSI, HighSI float64 // settings compared
	Why           string
}

// DialSetting is a setting as the dial shows it, in its unit.
type DialSetting struct {
	Reading estimate.Estimate // what to print, rounded to the graduation, with the rounding in its doubt; unknown: transducer only
	Exact   float64           // before it was rounded; NaN where unknown
}

const (
	// Fewer marks than this say nothing of a dial that may be bent.
	leastDialMarks = 3
	// A hand presses so much later than the eye sees the pointer on the mark, s,
	// standard. Judgement.
	reactionS = 0.2
	// A pointer is set to a mark within this share of the graduation, rectangular.
	// Judgement.
	pointerShare = 0.2
	// A setting may lie this share of the compared range beyond it. Judgement.
	dialBeyond = 0.1
)

// readDial compares the dial's marks with the setting at the presses.
func (w *work) readDial() {
	d := &w.res.Dial
	if face := w.setup.Tensioner.Dial; face != nil {
		d.Name, d.Unit, d.Graduation = face.Name, face.Unit, face.Graduation
	}
	w.dialPresses(d)
	d.Rising, d.Falling = d.compare(Rising), d.compare(Falling)
	d.AtRising = d.Read(Rising, w.res.AtRising.TrueSI)
	d.AtFalling = d.Read(Falling, w.res.AtFalling.TrueSI)
	w.warnDial(d)
}

// dialPresses takes the presses that stand for a reading of the dial.
func (w *work) dialPresses(d *Dial) {
	unreadable := 0
	for _, m := range w.set.Marks {
		if m.As != "dial" {
			continue
		}
		reading, err := w.setup.Tensioner.ParseDialReading(m.Declared)
		if err != nil || d.Unit != "" && reading.Unit != d.Unit {
			unreadable++
			continue
		}
		d.Unit = reading.Unit
		if p, ok := w.dialPress(m, reading); ok {
			d.Presses = append(d.Presses, p)
		}
	}
	if unreadable > 0 {
		w.warn("dial-unread", fmt.Sprintf("%d presses stand for readings that are not in the dial's unit: they are not used.", unreadable))
	}
}

// dialPress is the setting at a press, and which way it went; a press outside
// every cycle is none.
func (w *work) dialPress(m pairing.Mark, reading mill.DialReading) (DialPress, bool) {
	const about = 0.25 // s
	setting, _ := w.trace.mean(m.T-about, m.T+about)
	for i, c := range w.res.Cycles {
		if m.T < w.t[c.First] || m.T > w.t[c.Last] || !finite(setting) {
			continue
		}
		way := Rising
		if m.T > w.t[c.Peak] {
			way = Falling
		}
		moved := math.Abs(w.trace.gain(m.T, 1)) * reactionS
		if !finite(moved) {
			moved = 0
		}
		return DialPress{T: m.T, Reading: reading.Value, SettingSI: setting, MovedSI: moved, Direction: way, Cycle: i}, true
	}
	return DialPress{}, false
}

// compare fits the dial's reading on the setting, one way. Its scatter is that
// about the line, and never taken for less than a pointer can be set to a mark.
func (d *Dial) compare(way Direction) DialLine {
	var x, y []float64
	marks := map[float64]bool{}
	moved := 0.0
	for _, p := range d.Presses {
		if p.Direction == way {
			x, y = append(x, p.SettingSI), append(y, p.Reading)
			marks[p.Reading] = true
			moved += p.MovedSI
		}
	}
	switch {
	case len(d.Presses) == 0:
		return DialLine{Why: "nobody pressed at the marks of the mill's own dial"}
	case len(marks) < leastDialMarks:
		return DialLine{Why: fmt.Sprintf("%d marks of the dial were compared %s, %d are needed", len(marks), way, leastDialMarks)}
	}
	line, err := estimate.FitLine(x, y)
	if err != nil || !(line.B > 0) {
		return DialLine{Why: "the dial does not rise with the setting"}
	}
	l := DialLine{Line: line, SpreadDoF: line.DoF, LateStd: line.B * moved / float64(len(x)), LowSI: estimate.Quantile(x, 0), HighSI: estimate.Quantile(x, 1)}
	assumed := d.Graduation * pointerShare / math.Sqrt(3)
	if !(assumed > line.ResidualSD) {
		return l
	}
	weights := make([]float64, len(x))
	for i := range weights {
		weights[i] = 1 / (assumed * assumed)
	}
	if known, err := estimate.FitWeighted(x, y, weights); err == nil {
		l.Line, l.SpreadDoF = known, math.Inf(1)
		l.Line.ResidualSD = assumed
	}
	return l
}

// Read is a setting as the dial shows it. The doubt of the setting is carried
// over whole, though the error of the instrument is common to the curve and to
// the comparison and so cancels: the dial is not made out better than it.
func (d *Dial) Read(way Direction, setting estimate.Estimate) DialSetting {
	none := func(why string) DialSetting {
		return DialSetting{Reading: estimate.Unknown("transducer only: " + why), Exact: math.NaN()}
	}
	l := d.Rising
	if way == Falling {
		l = d.Falling
	}
	room := dialBeyond * (l.HighSI - l.LowSI)
	switch {
	case l.Why != "" || l.Line.N == 0:
		return none(orText(l.Why, "the dial was not compared"))
	case !setting.Known():
		return none(setting.Why)
	case setting.Value < l.LowSI-room || setting.Value > l.HighSI+room:
		return none("the setting lies outside the marks that were compared")
	}
	exact, std := l.Line.At(setting.Value)
	e := estimate.Estimate{Value: exact, Method: "mill's own dial, compared at its marks; " + setting.Method}
	parts := []estimate.Component{{Std: l.Line.B * setting.Random, DoF: setting.DoF}, {Std: std, DoF: l.SpreadDoF}}
	e.Random, e.DoF = estimate.RootSum(parts), estimate.EffectiveDoF(parts)
	e.System = math.Hypot(l.Line.B*setting.System, l.LateStd)
	if d.Graduation > 0 {
		e.Value = math.Round(exact/d.Graduation) * d.Graduation
		e.System = math.Hypot(e.System, d.Graduation/math.Sqrt(12))
		e.Method += "; rounded to its graduation"
	}
	return DialSetting{Reading: e, Exact: exact}
}

func orText(a, b string) string {
	if a != "" {
		return a
	}
	return b
}

// A dial that differs from the instrument by more than this share of the
// setting is worth a word. Judgement.
const dialOff = 0.02

// warnDial tells of a dial that reads apart from the instrument.
func (w *work) warnDial(d *Dial) {
	at := w.res.AtRising.SettingSI
	unit, ok := mill.DialReading{Unit: d.Unit}.SIUnit()
	if !ok || !at.Known() || !finite(d.AtRising.Exact) {
		return
	}
	off := d.AtRising.Exact - unit.FromSI(at.Value)
	doubt := 2 * math.Hypot(d.Rising.Line.ResidualSD, d.Rising.LateStd)
	if math.Abs(off) > math.Max(dialOff*unit.FromSI(at.Value), doubt) {
		w.warn("dial-off", fmt.Sprintf("At the target the mill's own dial shows %.1f %s %s than the instrument: test it on the bench.",
			math.Abs(off), unit.Name, map[bool]string{true: "more", false: "less"}[off > 0]))
	}
}
